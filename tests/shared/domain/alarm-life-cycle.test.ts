import { describe, expect, it } from 'vitest';
import {
  afterEvent,
  alarmEvents,
  type AlarmEvent,
  type AlarmFlags,
  alarmLifeCycle,
  alarmState,
  alarmStates,
  isOver,
  normalFlags,
} from '../../../shared/domain/alarm-life-cycle.ts';

const booleans = [false, true];
const everyFlags: AlarmFlags[] = booleans.flatMap((active) =>
  booleans.flatMap((acknowledged) =>
    booleans.flatMap((latched) =>
      booleans.flatMap((shelved) =>
        booleans.flatMap((suppressed) =>
          booleans.map((outOfService) => ({ active, acknowledged, latched, shelved, suppressed, outOfService })),
        ),
      ),
    ),
  ),
);

function run(events: AlarmEvent[], isInterlock: boolean): AlarmFlags {
  return events.reduce((flags, event) => {
    const next = afterEvent(flags, event, isInterlock);
    if (next === null) throw new Error(`${event} is refused in ${alarmState(flags)}`);
    return next;
  }, normalFlags);
}

const stateAfter = (events: AlarmEvent[], isInterlock = false) => alarmState(run(events, isInterlock));

describe('the life-cycle table', () => {
  for (const state of alarmStates) {
    for (const event of alarmEvents) {
      it(`is what the flags do: ${event} in ${state}`, () => {
        const cell = alarmLifeCycle[state][event];
        const starts = everyFlags.filter((flags) => alarmState(flags) === state);
        expect(starts.length).toBeGreaterThan(0);
        for (const flags of starts) {
          for (const isInterlock of booleans) {
            const next = afterEvent(flags, event, isInterlock);
            if (cell === 'refused') {
              expect(next).toBeNull();
              continue;
            }
            const told =
              cell === 'by-condition'
                ? alarmState({ ...flags, shelved: false, acknowledged: !flags.active })
                : typeof cell === 'string'
                  ? cell
                  : cell[flags.latched ? 'latched' : 'free'];
            expect(next === null ? null : alarmState(next)).toBe(told);
          }
        }
      });
    }
  }
});

describe('an alarm', () => {
  it('goes from unacknowledged over acknowledged to normal', () => {
    expect(stateAfter(['occur'])).toBe('unacknowledged');
    expect(stateAfter(['occur', 'acknowledge'])).toBe('acknowledged');
    expect(stateAfter(['occur', 'acknowledge', 'return'])).toBe('normal');
  });

  it('that returned unseen waits to be seen', () => {
    expect(stateAfter(['occur', 'return'])).toBe('returned');
    expect(stateAfter(['occur', 'return', 'acknowledge'])).toBe('normal');
    expect(stateAfter(['occur', 'return', 'occur'])).toBe('unacknowledged');
  });

  it('calls again once a shelf ends while the condition holds, and is over when it does not', () => {
    expect(stateAfter(['occur', 'acknowledge', 'shelve', 'unshelve'])).toBe('unacknowledged');
    expect(stateAfter(['occur', 'shelve', 'return', 'unshelve'])).toBe('normal');
  });
});

describe('an interlock', () => {
  it('that returned and was acknowledged is latched until it is reset', () => {
    expect(stateAfter(['occur', 'acknowledge', 'return'], true)).toBe('latched');
    expect(stateAfter(['occur', 'return', 'acknowledge'], true)).toBe('latched');
    expect(stateAfter(['occur', 'return', 'acknowledge', 'reset'], true)).toBe('normal');
  });

  it('can be reset while the value is still over', () => {
    const flags = run(['occur', 'reset'], true);
    expect(alarmState(flags)).toBe('acknowledged');
    expect(flags.latched).toBe(false);
    expect(stateAfter(['occur', 'reset', 'return'], true)).toBe('normal');
  });

  it('latches again on a re-alarm after its reset', () => {
    const flags = run(['occur', 'reset', 're-alarm'], true);
    expect(alarmState(flags)).toBe('unacknowledged');
    expect(flags.latched).toBe(true);
  });

  it('stays latched beneath a shelf', () => {
    const flags = run(['occur', 'acknowledge', 'shelve', 'return'], true);
    expect(alarmState(flags)).toBe('shelved');
    expect(flags.latched).toBe(true);
    expect(stateAfter(['occur', 'acknowledge', 'shelve', 'return', 'unshelve'], true)).toBe('latched');
  });

  it('that trips beneath a shelf latches all the same', () => {
    expect(run(['occur', 'reset', 'shelve', 'return', 'occur'], true).latched).toBe(true);
  });
});

it('is over only when nothing is left to do', () => {
  for (const flags of everyFlags) {
    expect(isOver(flags)).toBe(
      !flags.active && flags.acknowledged && !flags.latched && !flags.shelved && !flags.suppressed && !flags.outOfService,
    );
  }
});
