import { DateTime } from 'luxon';

/** A day of the site's calendar: 23 or 25 hours long where the clocks change. */
export interface SiteDay {
  fromMs: number;
  /** The next midnight, exclusive. */
  toMs: number;
}

/** The day of a time zone that a moment falls into. A zone without a midnight that day begins when its clocks jump. */
export function siteDay(timeZone: string, atMs: number): SiteDay {
  const start = DateTime.fromMillis(atMs, { zone: timeZone }).startOf('day');
  return { fromMs: start.toMillis(), toMs: start.plus({ days: 1 }).startOf('day').toMillis() };
}
