import type { ScheduleHead } from '#shared/mqtt/payloads.ts';
import type { HeadState } from './pump-state.ts';

const DAY_MS = 86_400_000;
const MINUTE_MS = 60_000;

/** A slot starts within this of its due time or never. */
export const SLOT_GRACE_MS = 60_000;

/** Due times of a head's slots in (afterMs, untilMs], ascending. */
export function dueTimes(plan: ScheduleHead, afterMs: number, untilMs: number): number[] {
  const due: number[] = [];
  for (let dayMs = Math.floor(afterMs / DAY_MS) * DAY_MS; dayMs <= untilMs; dayMs += DAY_MS) {
    for (const minute of plan.slotsUtcMin) {
      const dueMs = dayMs + minute * MINUTE_MS;
      if (dueMs > afterMs && dueMs <= untilMs) due.push(dueMs);
    }
  }
  return due;
}

/** The slot that should start now: due, in its grace, later than the schedule's arrival, and not dealt with before. */
export function slotToStart(head: HeadState, plan: ScheduleHead, arrivedMs: number, nowMs: number): number | undefined {
  const oldestMs = nowMs - SLOT_GRACE_MS - 1;
  return dueTimes(plan, Math.max(arrivedMs, oldestMs), nowMs).find((dueMs) => !head.handledDueMs.includes(dueMs));
}

/** When the next slot falls due, looking one day ahead; undefined without slots. */
export function nextDueMs(plan: ScheduleHead, nowMs: number): number | undefined {
  return dueTimes(plan, nowMs, nowMs + DAY_MS)[0];
}
