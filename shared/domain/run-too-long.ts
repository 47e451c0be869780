/** How far a run may exceed what it was to take or to give. */
const FACTOR = 1.5;
const GRACE_MS = 10_000;
/** Expected time of a run about which no schedule says anything, ms. */
const UNKNOWN_RUN_MS = 60_000;

/** What is known of the intent of a run. */
export interface RunIntent {
  /** What the run was to give, mL: the slot, or the dose ordered; null when nobody set a volume. */
  setMl: number | null;
  /** The pump's ceiling for one run by the schedule in force, mL; null without a schedule. */
  maxMlPerRun: number | null;
  /** Delivery rate, mL/s; null when unknown. */
  mlPerSecond: number | null;
}

export interface RunBounds {
  /** The time that the run should take, ms. */
  expectedMs: number;
  /** Past this since its `begun` arrived the run is too long, ms: 1.5 x expected + 10 s. */
  longestMs: number;
  /** Past this volume the run is too long, mL: 1.5 x what it was to give; null when nothing says how much. */
  mostMl: number | null;
}

/**
 * The bounds of one run. Without a set volume the pump's ceiling for a run takes its place; without a schedule the run
 * may take 60 s.
 * @example runBounds({ setMl: 0.55, maxMlPerRun: 0.66, mlPerSecond: 1.1 }) // expected 500 ms, longest 10,750 ms, most 0.825 mL
 */
export function runBounds({ setMl, maxMlPerRun, mlPerSecond }: RunIntent): RunBounds {
  const intendedMl = setMl ?? maxMlPerRun;
  const expectedMs = intendedMl === null || mlPerSecond === null ? UNKNOWN_RUN_MS : (intendedMl / mlPerSecond) * 1000;
  return {
    expectedMs,
    longestMs: FACTOR * expectedMs + GRACE_MS,
    mostMl: intendedMl === null ? null : FACTOR * intendedMl,
  };
}

export interface RunProgress {
  /** Arrival of its `begun`, or of its first report when that got lost, ms. */
  begunArrivedMs: number;
  /** When the pump came back last, ms; null while it is away: a run cannot be timed then. */
  pumpBackMs: number | null;
  /** When the server came back last, ms. */
  serverBackMs: number;
  ended: boolean;
  /** Delivered so far, mL. */
  ml: number;
}

export type RunExcess =
  { by: 'volume'; value: number; limit: number; unit: 'mL' } | { by: 'time'; value: number; limit: number; unit: 's' };

/** Volumes closer than this are the same, mL: sums of portions are not exact in binary. */
const SAME_ML = 1e-6;

/**
 * What makes a run too long: its volume, at once; or its time, counted from the arrival of its `begun`, or from
 * the return of the pump or of the server when either was away in between. Null while it is within bounds.
 */
export function runExcess(run: RunProgress, bounds: RunBounds, nowMs: number): RunExcess | null {
  if (bounds.mostMl !== null && run.ml > bounds.mostMl + SAME_ML) return { by: 'volume', value: run.ml, limit: bounds.mostMl, unit: 'mL' };
  if (run.ended || run.pumpBackMs === null) return null;
  const elapsedMs = nowMs - Math.max(run.begunArrivedMs, run.pumpBackMs, run.serverBackMs);
  if (elapsedMs <= bounds.longestMs) return null;
  return { by: 'time', value: elapsedMs / 1000, limit: bounds.longestMs / 1000, unit: 's' };
}
