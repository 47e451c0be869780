import { type RunPayload, UNSET_CLOCK_BELOW_MS } from '#shared/mqtt/payloads.ts';
import { EARLIEST_MS, FARTHEST_AHEAD_MS } from '../ingest/plausible-time.ts';

export interface RunTimes {
  /** When the step happened. */
  stepMs: number;
  /** When the run began, as far as this step tells. */
  begunMs: number;
  flags: RunClockFlag[];
}

export type RunClockFlag = 'clock-unset' | 'clock-off';

/** A pump whose clock differs from ours by more than this is not believed about times. */
const MAX_OFFSET_MS = 2 * 60_000;
/** A run that says it began longer ago than this names no moment that it could have begun at. */
const LONGEST_RUN_MS = 86_400_000;

function clockFlag(atMs: number, receivedMs: number, clock: { offsetMs: number | null; isUnset: boolean }): RunClockFlag | null {
  if (atMs < UNSET_CLOCK_BELOW_MS) return 'clock-unset';
  if (atMs < EARLIEST_MS || atMs > receivedMs + FARTHEST_AHEAD_MS) return 'clock-off';
  return clock.isUnset || Math.abs(clock.offsetMs ?? 0) > MAX_OFFSET_MS ? 'clock-off' : null;
}

/**
 * Dates a step of a run. No run is refused for its clock: where the clock cannot be believed the step takes the time of
 * its arrival and is flagged; otherwise its own time, however late it comes.
 * @param clock what the pump's newest `state` told.
 */
export function runTimes(payload: RunPayload, receivedMs: number, clock: { offsetMs: number | null; isUnset: boolean }): RunTimes {
  const { atMs, begunMs, onMs, phase } = payload;
  const flag = clockFlag(atMs, receivedMs, clock);
  if (flag !== null) return { stepMs: receivedMs, begunMs: receivedMs, flags: [flag] };
  if (phase === 'begun') return { stepMs: atMs, begunMs: atMs, flags: [] };
  const saidMs = begunMs ?? (onMs === undefined ? atMs : Math.round(atMs - onMs));
  const isPlausible = saidMs >= EARLIEST_MS && saidMs <= atMs && atMs - saidMs <= LONGEST_RUN_MS;
  return { stepMs: atMs, begunMs: isPlausible ? saidMs : atMs, flags: [] };
}
