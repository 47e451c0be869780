import { DateTime } from 'luxon';
import type { DayWindow } from '#shared/domain/slot-layout.ts';

/** From 10:00 to 18:00 site time: this project's own choice while no light schedule is known. Oxygen is lowest at night. */
const START_HOUR = 10;
const LENGTH_MIN = 480;

/** The window in which portions are given, in the UTC day, by the offset that the site has at `atMs`. */
export function doseWindow(timeZone: string, atMs: number): DayWindow {
  const offsetMin = DateTime.fromMillis(atMs, { zone: timeZone }).offset;
  return { startUtcMin: (START_HOUR * 60 - offsetMin + 2 * 1440) % 1440, lengthMin: LENGTH_MIN };
}
