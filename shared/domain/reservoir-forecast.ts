const DAY_MS = 86_400_000;

/** Farther ahead than this nobody plans by it. */
const FARTHEST_DAYS = 3650;

/**
 * When a reservoir will be empty at its planned dose, UTC ms. Null without a dose, or when that is over ten years away.
 * One that is empty already lasts until now.
 * @example emptyAtMs({ remainingMl: 84, mlPerDay: 8.4, nowMs: 0 }) // 864_000_000, ten days on
 */
export function emptyAtMs(reservoir: { remainingMl: number; mlPerDay: number; nowMs: number }): number | null {
  if (reservoir.mlPerDay <= 0) return null;
  const days = Math.max(0, reservoir.remainingMl) / reservoir.mlPerDay;
  return days > FARTHEST_DAYS ? null : Math.round(reservoir.nowMs + days * DAY_MS);
}
