import { siteDay } from '../systems/site-day.ts';

const QUARTER_MS = 900_000;
const HOUR_MS = 3_600_000;
const DAY_MS = 86_400_000;

/** Widths that divide a day, or are whole days: all of them multiples of 15 minutes. */
const widthsMs = [1, 2, 4, 8, 12, 24, 48].map((quarters) => quarters * QUARTER_MS);

/** The narrowest bucket of which at most `points` cover the range. */
export function bucketWidthMs(rangeMs: number, points: number): number {
  // One more than divides it, since the first bucket may begin before the range.
  const narrow = [...widthsMs, 24 * HOUR_MS].find((widthMs) => rangeMs / widthMs + 1 <= points);
  return narrow ?? Math.max(1, Math.ceil(rangeMs / DAY_MS / Math.max(points - 1, 1))) * DAY_MS;
}

/**
 * Where buckets begin, by the days of the site: within a day at multiples of the width from its midnight, else at the
 * midnight of every so many days from the first. Ask for ascending times only.
 */
export function createBuckets(timeZone: string, fromMs: number, widthMs: number): (atMs: number) => number {
  let day = siteDay(timeZone, fromMs);
  let startMs = day.fromMs;
  let daysIn = 0;
  const daysWide = Math.max(1, Math.round(widthMs / DAY_MS));

  return (atMs) => {
    while (atMs >= day.toMs) {
      day = siteDay(timeZone, day.toMs);
      daysIn = (daysIn + 1) % daysWide;
      if (daysIn === 0) startMs = day.fromMs;
    }
    return widthMs >= DAY_MS ? startMs : day.fromMs + Math.floor((atMs - day.fromMs) / widthMs) * widthMs;
  };
}
