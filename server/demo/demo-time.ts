const DAY_MS = 86_400_000;
const HOUR_MS = 3_600_000;
/** What the scenario dates later than the anchor is taken to have been done this long before it. */
const JUST_NOW_MS = 600_000;

/** The time of an hour of the UTC day so many days before the anchor's day, never later than just before the anchor. */
export function demoTime(anchorMs: number, daysAgo: number, hour: number): number {
  const today = Math.floor(anchorMs / DAY_MS) * DAY_MS;
  return Math.min(today - daysAgo * DAY_MS + hour * HOUR_MS, anchorMs - JUST_NOW_MS);
}
