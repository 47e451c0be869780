/** A phone's clock may be ahead of the server's by this much. */
const AHEAD_MS = 10 * 60_000;

/** Before this nobody has records worth having, and a slip of the year is likelier: 1990-01-01. */
const EARLIEST_MS = Date.UTC(1990, 0, 1);

/** Why a record by hand cannot be of this time (both UTC ms); null when it can. The limits are the project's own choice. */
export function recordTimeProblem(atMs: number, nowMs: number): 'in-the-future' | 'too-early' | null {
  if (atMs > nowMs + AHEAD_MS) return 'in-the-future';
  return atMs < EARLIEST_MS ? 'too-early' : null;
}
