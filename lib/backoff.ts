/**
 * How long to wait before try number `attempt` (from 0), in milliseconds: doubling from half a second to 30 s, spread by
 * `random` (0 to 1) over the upper half so that many browsers do not come back at once.
 */
export function backoffMs(attempt: number, random: number): number {
  const fullMs = Math.min(30_000, 500 * 2 ** Math.min(attempt, 10));
  return fullMs / 2 + (fullMs / 2) * random;
}
