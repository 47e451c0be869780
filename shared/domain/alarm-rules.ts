import type { AlarmCode } from './alarm-codes.ts';
import { comparePriority, type Priority } from './alarm-priority.ts';

export type LimitKind = 'soft' | 'hard';

/** What a rule may be aimed at: the whole system, or one head or device of it. */
export type TargetKind = 'system' | 'head' | 'device';

/** What holds for a code until a keeper says otherwise. */
export interface AlarmRuleDefault {
  /** Priority by limit; a code without a hard limit is a soft one and the other way round. */
  priority: Partial<Record<LimitKind, Priority>>;
  /** Whether passing hard stops every carbon head of the system, and keeps it stopped until a reset. */
  interlock: boolean;
  /** Unit of limits and deadband; fixed for a code. */
  unit: 'mL' | 's';
  /** Whether the limits may be numbers; else the rule is a pattern that only can be delayed or switched off. */
  takesNumbers: boolean;
  targets: readonly TargetKind[];
  onDelaySeconds: number;
  offDelaySeconds: number;
  /** How far a value must fall back under its limit before the alarm is over, in `unit`. */
  deadband: number;
}

const volume: AlarmRuleDefault = {
  priority: { soft: 'medium', hard: 'urgent' },
  interlock: true,
  unit: 'mL',
  takesNumbers: true,
  targets: ['system'],
  onDelaySeconds: 0,
  offDelaySeconds: 0,
  deadband: 0,
};

export const alarmRuleDefaults: Record<AlarmCode, AlarmRuleDefault> = {
  'volume-hour': volume,
  'volume-day': volume,
  'volume-week': volume,
  'run-too-long': {
    priority: { hard: 'urgent' },
    interlock: true,
    unit: 's',
    takesNumbers: false,
    targets: ['system', 'head'],
    onDelaySeconds: 0,
    offDelaySeconds: 0,
    deadband: 0,
  },
  // The delay lets a pump that only lost its connection come back before an alarm shows.
  'device-offline': {
    priority: { soft: 'medium' },
    interlock: false,
    unit: 's',
    takesNumbers: false,
    targets: ['system', 'device'],
    onDelaySeconds: 10,
    offDelaySeconds: 10,
    deadband: 0,
  },
};

/** The priority that a rule is shown and set with: of its hard limit where it has one. */
export function mainPriority(code: AlarmCode): Priority {
  const { hard, soft } = alarmRuleDefaults[code].priority;
  return hard ?? soft ?? 'medium';
}

/**
 * Priority of one occurrence. The rule's own priority is that of its main limit; the soft limit of a rule that also
 * has a hard one keeps its default, and never presses more than the rule.
 */
export function priorityOf(code: AlarmCode, limitKind: LimitKind, rulePriority: Priority): Priority {
  const { soft, hard } = alarmRuleDefaults[code].priority;
  if (limitKind === 'hard' || hard === undefined || soft === undefined) return rulePriority;
  return comparePriority(soft, rulePriority) < 0 ? soft : rulePriority;
}

const HOUR_MS = 3_600_000;

/** The longest that an alarm may be shelved: an interlock 8 h, others 7 days, ms. */
export function longestShelfMs(isInterlock: boolean): number {
  return isInterlock ? 8 * HOUR_MS : 7 * 24 * HOUR_MS;
}
