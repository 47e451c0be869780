/**
 * States in the words of ISA-18.2 / IEC 62682, with `latched` for an interlock whose cause is gone but which nobody reset.
 */
export const alarmStates = [
  'unacknowledged',
  'acknowledged',
  'returned',
  'latched',
  'shelved',
  'suppressed',
  'out-of-service',
  'normal',
] as const;
export type AlarmState = (typeof alarmStates)[number];

export const alarmEvents = ['occur', 're-alarm', 'return', 'acknowledge', 'reset', 'shelve', 'unshelve'] as const;
export type AlarmEvent = (typeof alarmEvents)[number];

/** What is stored of an occurrence; its state follows. */
export interface AlarmFlags {
  active: boolean;
  acknowledged: boolean;
  /** An interlock that tripped and was not reset. */
  latched: boolean;
  shelved: boolean;
  suppressed: boolean;
  outOfService: boolean;
}

/** Of an alarm that never occurred. */
export const normalFlags: AlarmFlags = {
  active: false,
  acknowledged: true,
  latched: false,
  shelved: false,
  suppressed: false,
  outOfService: false,
};

/** The state that the flags mean. What keeps an alarm quiet covers what lies beneath. */
export function alarmState(flags: AlarmFlags): AlarmState {
  if (flags.outOfService) return 'out-of-service';
  if (flags.suppressed) return 'suppressed';
  if (flags.shelved) return 'shelved';
  if (flags.active) return flags.acknowledged ? 'acknowledged' : 'unacknowledged';
  if (!flags.acknowledged) return 'returned';
  return flags.latched ? 'latched' : 'normal';
}

/** Next state; where it depends on the latch, on whether the alarm is latched before the event. */
type Next = AlarmState | { latched: AlarmState; free: AlarmState } | 'refused' | 'by-condition';

const whenOver: Next = { latched: 'latched', free: 'normal' };

function quiet(state: AlarmState): Record<AlarmEvent, Next> {
  return { occur: state, 're-alarm': state, return: state, acknowledge: state, reset: state, shelve: 'refused', unshelve: state };
}

/**
 * The whole life cycle. `refused`: the event makes no sense there. `by-condition`: to unacknowledged when the
 * condition still holds, else as an alarm that is over. Acknowledging, returning and resetting beneath a shelf change
 * what comes out when it ends.
 */
export const alarmLifeCycle: Record<AlarmState, Record<AlarmEvent, Next>> = {
  normal: {
    occur: 'unacknowledged',
    're-alarm': 'unacknowledged',
    return: 'normal',
    acknowledge: 'normal',
    reset: 'normal',
    shelve: 'refused',
    unshelve: 'normal',
  },
  unacknowledged: {
    occur: 'unacknowledged',
    're-alarm': 'unacknowledged',
    return: 'returned',
    acknowledge: 'acknowledged',
    reset: 'acknowledged',
    shelve: 'shelved',
    unshelve: 'unacknowledged',
  },
  acknowledged: {
    occur: 'acknowledged',
    're-alarm': 'unacknowledged',
    return: whenOver,
    acknowledge: 'acknowledged',
    reset: 'acknowledged',
    shelve: 'shelved',
    unshelve: 'acknowledged',
  },
  returned: {
    occur: 'unacknowledged',
    're-alarm': 'unacknowledged',
    return: 'returned',
    acknowledge: whenOver,
    reset: 'normal',
    shelve: 'shelved',
    unshelve: 'returned',
  },
  latched: {
    occur: 'unacknowledged',
    're-alarm': 'unacknowledged',
    return: 'latched',
    acknowledge: 'latched',
    reset: 'normal',
    shelve: 'shelved',
    unshelve: 'latched',
  },
  shelved: {
    occur: 'shelved',
    're-alarm': 'shelved',
    return: 'shelved',
    acknowledge: 'shelved',
    reset: 'shelved',
    shelve: 'shelved',
    unshelve: 'by-condition',
  },
  suppressed: quiet('suppressed'),
  'out-of-service': quiet('out-of-service'),
};

/**
 * The flags after an event, or null where the life cycle refuses it.
 * @param isInterlock whether the limit that tripped stops pumps; it latches on `occur` and `re-alarm`, whatever keeps the
 *   alarm quiet: a shelf silences the call, never the stop.
 */
export function afterEvent(flags: AlarmFlags, event: AlarmEvent, isInterlock: boolean): AlarmFlags | null {
  if (alarmLifeCycle[alarmState(flags)][event] === 'refused') return null;
  switch (event) {
    case 'occur':
      return flags.active ? flags : { ...flags, active: true, acknowledged: false, latched: flags.latched || isInterlock };
    case 're-alarm':
      return { ...flags, active: true, acknowledged: false, latched: flags.latched || isInterlock };
    case 'return':
      return { ...flags, active: false };
    case 'acknowledge':
      return { ...flags, acknowledged: true };
    case 'reset':
      return { ...flags, latched: false, acknowledged: true };
    case 'shelve':
      return { ...flags, shelved: true };
    case 'unshelve':
      return flags.shelved ? { ...flags, shelved: false, acknowledged: !flags.active } : flags;
  }
}

/** True when nothing is left to do about an occurrence, so that the next one is a new row. */
export function isOver(flags: AlarmFlags): boolean {
  return alarmState(flags) === 'normal';
}
