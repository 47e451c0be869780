import { UNSET_CLOCK_BELOW_MS, type ScheduleHead } from '#shared/mqtt/payloads.ts';
import type { HeadState, PumpState, PumpTime } from './pump-state.ts';

const HOUR_MS = 3_600_000;
const DAY_MS = 86_400_000;

/** Volume that a head gave in the window before now; what cannot be dated counts as within it. */
function givenMl(state: PumpState, head: HeadState, time: PumpTime, windowMs: number): number {
  return head.delivered
    .filter((one) => (time.isSet || one.boot === state.boot ? one.atMs > time.nowMs - windowMs : true))
    .reduce((sum, one) => sum + one.ml, 0);
}

/** What a run on this head may give in all from now on, mL, by the three ceilings. The run in progress is not among `delivered`. */
export function roomMl(state: PumpState, head: HeadState, limits: ScheduleHead, time: PumpTime): number {
  return Math.max(
    0,
    Math.min(
      limits.maxMlPerRun,
      limits.maxMlPerHour - givenMl(state, head, time, HOUR_MS),
      limits.maxMlPerDay - givenMl(state, head, time, DAY_MS),
    ),
  );
}

/** Forgets what no window can reach any more. */
export function forgetOld(head: HeadState, time: PumpTime): void {
  if (time.isSet) head.delivered = head.delivered.filter((one) => one.atMs > time.nowMs - DAY_MS);
}

/** Two clocks in one box never tick quite alike; what differs by more was moved. */
const MOVED_BY_MS = 1_000;

/**
 * Keeps the ages of deliveries right when the time of day is moved: those of this power-on move with it; those of an earlier
 * power-on without a clock get the present as their date, so that they count for as long as they possibly can.
 */
export function followClock(state: PumpState, time: PumpTime): void {
  const expectedMs = state.time.nowMs + (time.upMs - state.time.upMs);
  const movedMs = Math.abs(time.nowMs - expectedMs) > MOVED_BY_MS ? time.nowMs - expectedMs : 0;
  for (const head of state.heads) {
    for (const one of head.delivered) {
      if (one.boot === state.boot) one.atMs += movedMs;
      else if (time.isSet && one.atMs < UNSET_CLOCK_BELOW_MS) one.atMs = time.nowMs;
    }
    if (head.current !== null) head.current.begunMs += movedMs;
  }
  if (!time.isSet || state.schedule === null) return;
  // A clock that ran ahead must not hold slots back once it is put right.
  state.scheduleArrivedMs = Math.min(state.scheduleArrivedMs ?? time.nowMs, time.nowMs);
}
