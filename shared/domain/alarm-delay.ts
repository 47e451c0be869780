/** A condition that has come or gone while its delay has not passed yet. */
export interface DelayPending {
  edge: 'on' | 'off';
  sinceMs: number;
}

export interface AlarmDelays {
  onDelayMs: number;
  offDelayMs: number;
}

export interface DelayStep {
  pending: DelayPending | null;
  /** What happens to the alarm now; null while a delay runs or nothing changes. */
  event: 'occur' | 'return' | null;
}

/**
 * On-delay and off-delay (ISA-18.2): a condition must hold for the on-delay before the alarm occurs, and be gone for
 * the off-delay before it returns. A condition that flips back in between starts anew. No delay acts at once.
 */
export function delayStep(
  now: { isActive: boolean; conditionHolds: boolean; pending: DelayPending | null; nowMs: number },
  delays: AlarmDelays,
): DelayStep {
  if (now.isActive === now.conditionHolds) return { pending: null, event: null };
  const edge = now.conditionHolds ? 'on' : 'off';
  const sinceMs = now.pending?.edge === edge ? now.pending.sinceMs : now.nowMs;
  const delayMs = edge === 'on' ? delays.onDelayMs : delays.offDelayMs;
  if (now.nowMs - sinceMs < delayMs) return { pending: { edge, sinceMs }, event: null };
  return { pending: null, event: edge === 'on' ? 'occur' : 'return' };
}

/**
 * Whether a limit counts as passed. An active alarm needs the value to fall back by the deadband before it is over.
 * @param excess value less limit, in the unit of the rule; above 0 is past the limit.
 */
export function isPast(excess: number, deadband: number, isActive: boolean): boolean {
  return excess > (isActive ? -deadband : 0);
}
