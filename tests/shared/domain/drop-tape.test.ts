import * as fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { dropTape, type TapeFacts, type TapePump, type TapeRun, type TapeSlot, type TapeStop } from '../../../shared/domain/drop-tape.ts';

const SECOND_MS = 1_000;
const MINUTE_MS = 60_000;
const HOUR_MS = 3_600_000;
const dueMs = Date.parse('2026-03-01T10:00:00Z');

const slot = (more: Partial<TapeSlot> = {}): TapeSlot => ({
  deviceId: 'pump',
  head: 1,
  dueMs,
  ml: 0.5,
  enabled: true,
  maxMlPerHour: 1,
  maxMlPerDay: 2,
  ...more,
});

const run = (more: Partial<TapeRun> = {}): TapeRun => ({
  id: 'r1',
  deviceId: 'pump',
  head: 1,
  beganMs: dueMs + 3 * SECOND_MS,
  endedMs: dueMs + 4 * SECOND_MS,
  ml: 0.5,
  cause: 'schedule',
  dueMs,
  ...more,
});

const stop = (more: Partial<TapeStop> = {}): TapeStop => ({
  deviceId: 'pump',
  head: 1,
  cause: 'person',
  stoppedMs: dueMs - HOUR_MS,
  resumedMs: null,
  isProved: true,
  ...more,
});

const pump = (more: Partial<TapePump> = {}): TapePump => ({
  deviceId: 'pump',
  isOnline: true,
  heardMs: dueMs + 10 * MINUTE_MS,
  changedMs: dueMs - 5 * HOUR_MS,
  ...more,
});

const facts = (more: Partial<TapeFacts<TapeSlot>>): TapeFacts<TapeSlot> => ({
  slots: [slot()],
  runs: [],
  stops: [],
  pumps: [pump()],
  nowMs: dueMs + 10 * MINUTE_MS,
  ...more,
});

const markOf = (more: Partial<TapeFacts<TapeSlot>>) => dropTape(facts(more)).slots.map((one) => one.mark);
const unplannedOf = (more: Partial<TapeFacts<TapeSlot>>) => dropTape(facts(more)).unplanned.map((one) => one.id);

describe('a slot with a run', () => {
  it('is running while the run has not ended', () => {
    expect(markOf({ runs: [run({ endedMs: null, ml: 0.2 })] })).toEqual(['running']);
  });

  it('is unheard when the pump went away in the middle of the run', () => {
    expect(markOf({ runs: [run({ endedMs: null, ml: 0.2 })], pumps: [pump({ isOnline: false })] })).toEqual(['unheard']);
  });

  it.each([
    [0.5, 'delivered'],
    [0.9, 'delivered'],
    [0.45, 'delivered'],
    [0.449, 'partial'],
    [0.001, 'partial'],
    [0, 'missed'],
  ])('that gave %f of 0.5 mL is %s', (ml, mark) => {
    expect(markOf({ runs: [run({ ml })] })).toEqual([mark]);
  });

  it('keeps its mark when the head was stopped in the middle of the run', () => {
    expect(markOf({ runs: [run({ ml: 0.2 })], stops: [stop({ stoppedMs: dueMs + 4 * SECOND_MS })] })).toEqual(['partial']);
  });

  it('takes the run of its due time, however late it began', () => {
    expect(markOf({ runs: [run({ beganMs: dueMs + 59 * SECOND_MS })] })).toEqual(['delivered']);
  });

  it.each([
    ['a run that names no due time and began within 60 s', run({ dueMs: null, beganMs: dueMs - MINUTE_MS }), 'delivered', []],
    ['a run that names a due time within 60 s', run({ dueMs: dueMs + 30 * SECOND_MS }), 'delivered', []],
    ['no run that began more than 60 s away', run({ dueMs: null, beganMs: dueMs + MINUTE_MS + 1 }), 'missed', ['r1']],
    ['no run of another head', run({ head: 2 }), 'missed', ['r1']],
    ['no run of another pump', run({ deviceId: 'other' }), 'missed', ['r1']],
    ['no run by order', run({ cause: 'order', dueMs: null }), 'missed', ['r1']],
    ['no run by button, even if it names the slot', run({ cause: 'button' }), 'missed', ['r1']],
  ])('takes %s', (_, given, mark, unplanned) => {
    expect(markOf({ runs: [given] })).toEqual([mark]);
    expect(unplannedOf({ runs: [given] })).toEqual(unplanned);
  });

  it('takes the nearest of two slots, and a second run takes the other', () => {
    const slots = [slot(), slot({ dueMs: dueMs + 90 * SECOND_MS })];
    const runs = [
      run({ id: 'near', dueMs: null, beganMs: dueMs + 40 * SECOND_MS }),
      run({ id: 'far', dueMs: null, beganMs: dueMs + 50 * SECOND_MS }),
    ];
    expect(dropTape(facts({ slots, runs })).slots.map((one) => one.run?.id)).toEqual(['near', 'far']);
  });

  it('takes the earlier of two runs for the same due time, and the other is unplanned', () => {
    const slots = [slot(), slot({ dueMs: dueMs + 30 * SECOND_MS })];
    const runs = [run({ id: 'second', beganMs: dueMs + 20 * SECOND_MS }), run({ id: 'first' })];
    const tape = dropTape(facts({ slots, runs, nowMs: dueMs + MINUTE_MS }));
    expect(tape.slots.map((one) => [one.mark, one.run?.id])).toEqual([
      ['delivered', 'first'],
      ['planned', undefined],
    ]);
    expect(tape.unplanned.map((one) => one.id)).toEqual(['second']);
  });
});

describe('a slot without a run', () => {
  it('is planned until 60 s and the grace of the report have passed', () => {
    expect(markOf({ nowMs: dueMs - HOUR_MS })).toEqual(['planned']);
    expect(markOf({ nowMs: dueMs + 90 * SECOND_MS })).toEqual(['planned']);
    expect(markOf({ nowMs: dueMs + 90 * SECOND_MS + 1 })).toEqual(['missed']);
  });

  it('is missed when the pump was heard after it could last have started, and unheard else', () => {
    expect(markOf({ pumps: [pump({ heardMs: dueMs + MINUTE_MS })] })).toEqual(['missed']);
    expect(markOf({ pumps: [pump({ heardMs: dueMs + MINUTE_MS - 1 })] })).toEqual(['unheard']);
    expect(markOf({ pumps: [pump({ heardMs: dueMs - HOUR_MS, isOnline: false })] })).toEqual(['unheard']);
    expect(markOf({ pumps: [] })).toEqual(['unheard']);
  });

  it('stays unheard for a minute after the return of the pump, whose buffer is still coming', () => {
    const returned = pump({ heardMs: dueMs + HOUR_MS, changedMs: dueMs + HOUR_MS });
    expect(markOf({ pumps: [returned], nowMs: dueMs + HOUR_MS + 59 * SECOND_MS })).toEqual(['unheard']);
    expect(markOf({ pumps: [returned], nowMs: dueMs + HOUR_MS + 60 * SECOND_MS })).toEqual(['missed']);
  });

  it.each([
    ['held', 'a person', stop()],
    ['interlocked', 'an alarm', stop({ cause: 'interlock' })],
  ] as const)('is %s when %s kept its head stopped', (mark, _, given) => {
    expect(markOf({ slots: [slot({ enabled: false })], stops: [given] })).toEqual([mark]);
    expect(markOf({ slots: [slot({ enabled: false })], stops: [given], nowMs: dueMs - HOUR_MS })).toEqual([mark]);
  });

  it('is unheard under a stop that the pump has not proved, or of a pump that is away', () => {
    const off = { slots: [slot({ enabled: false })] };
    const wished = stop({ isProved: false });
    expect(markOf({ ...off, stops: [wished] })).toEqual(['unheard']);
    expect(markOf({ ...off, stops: [wished], nowMs: dueMs - HOUR_MS })).toEqual(['unheard']);
    const away = pump({ isOnline: false, heardMs: dueMs + MINUTE_MS - 1 });
    expect(markOf({ ...off, stops: [stop()], pumps: [away] })).toEqual(['unheard']);
    expect(markOf({ ...off, stops: [stop()], pumps: [] })).toEqual(['unheard']);
  });

  it('stays held when the pump proved its stop, was heard after the slot, and went away later', () => {
    const away = pump({ isOnline: false, heardMs: dueMs + MINUTE_MS });
    expect(markOf({ slots: [slot({ enabled: false })], stops: [stop()], pumps: [away] })).toEqual(['held']);
  });

  it('is held when the stop came before it could start', () => {
    expect(markOf({ stops: [stop({ stoppedMs: dueMs + MINUTE_MS })] })).toEqual(['held']);
    expect(markOf({ stops: [stop({ stoppedMs: dueMs + MINUTE_MS + 1 })] })).toEqual(['missed']);
  });

  it('is not touched by the stop of another head, or by one that ended before', () => {
    expect(markOf({ stops: [stop({ head: 2 })] })).toEqual(['missed']);
    expect(markOf({ stops: [stop({ resumedMs: dueMs - 1 })] })).toEqual(['missed']);
    expect(markOf({ slots: [slot({ enabled: false })], stops: [stop({ resumedMs: dueMs, isProved: false })] })).toEqual(['held']);
  });

  it('of a disabled head that nobody stopped was never planned', () => {
    expect(markOf({ slots: [slot({ enabled: false })] })).toEqual([]);
  });

  it('is held when the portions of before still fill the hour or the day of the pump', () => {
    const before = (hours: number, id: string) => run({ id, cause: 'button', dueMs: null, beganMs: dueMs - hours * HOUR_MS, ml: 0.6 });
    expect(markOf({ runs: [before(0.5, 'a')] })).toEqual(['held']);
    expect(markOf({ runs: [before(2, 'a')] })).toEqual(['missed']);
    expect(markOf({ runs: [before(2, 'a'), before(5, 'b'), before(8, 'c')] })).toEqual(['held']);
    expect(markOf({ runs: [before(2, 'a'), before(5, 'b'), before(24, 'c')] })).toEqual(['missed']);
    expect(markOf({ runs: [{ ...before(0.5, 'a'), cause: 'calibration' }] })).toEqual(['missed']);
  });
});

describe('any tape', () => {
  const headArbitrary = fc.integer({ min: 1, max: 2 });
  const minuteArbitrary = fc.integer({ min: 0, max: 60 });
  const slotsArbitrary = fc.uniqueArray(fc.record({ head: headArbitrary, minute: minuteArbitrary }), {
    selector: (one) => `${one.head} ${one.minute}`,
  });
  const runsArbitrary = fc.array(
    fc.record({ head: headArbitrary, minute: minuteArbitrary, namesDue: fc.boolean(), isScheduled: fc.boolean() }),
    { maxLength: 20 },
  );

  it('shows every enabled slot once and every run once', () => {
    fc.assert(
      fc.property(slotsArbitrary, runsArbitrary, (slotSpecs, runSpecs) => {
        const slots = slotSpecs.map(({ head, minute }) => slot({ head, dueMs: dueMs + minute * MINUTE_MS }));
        const runs = runSpecs.map(({ head, minute, namesDue, isScheduled }, index) => {
          const atMs = dueMs + minute * MINUTE_MS;
          return run({
            id: `${index}`,
            head,
            beganMs: atMs + 1,
            dueMs: namesDue ? atMs : null,
            cause: isScheduled ? 'schedule' : 'button',
          });
        });
        const tape = dropTape(facts({ slots, runs, nowMs: dueMs + 3 * HOUR_MS }));
        expect(tape.slots.map((one) => one.slot)).toEqual(slots);
        const shown = [...tape.slots.flatMap((one) => (one.run === null ? [] : [one.run.id])), ...tape.unplanned.map((one) => one.id)];
        expect(shown.sort()).toEqual(runs.map((one) => one.id).sort());
      }),
    );
  });
});
