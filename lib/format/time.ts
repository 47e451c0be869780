import { DateTime } from 'luxon';

const minuteMs = 60_000;
const hourMs = 60 * minuteMs;
const dayMs = 24 * hourMs;

/** A time as epoch milliseconds or as the API sends it, in the zone of the site. */
export function inZone(time: number | string, timeZone: string): DateTime {
  return typeof time === 'number' ? DateTime.fromMillis(time, { zone: timeZone }) : DateTime.fromISO(time, { zone: timeZone });
}

/** `14:02` */
export function formatClock(time: number | string, timeZone: string): string {
  return inZone(time, timeZone).toFormat('HH:mm');
}

/** `14:02:07` */
export function formatClockWithSeconds(time: number | string, timeZone: string): string {
  return inZone(time, timeZone).toFormat('HH:mm:ss');
}

/** `9 March`, with the year when it is not the current one. */
export function formatDay(time: number | string, timeZone: string, nowMs: number): string {
  const day = inZone(time, timeZone);
  return day.toFormat(day.year === inZone(nowMs, timeZone).year ? 'd LLLL' : 'd LLLL yyyy');
}

/** `9 March, 14:02`: the absolute time that stands behind every relative one. */
export function formatDayAndClock(time: number | string, timeZone: string, nowMs: number): string {
  return `${formatDay(time, timeZone, nowMs)}, ${formatClock(time, timeZone)}`;
}

/** A day as the title of what happened on it: `Today`, `Yesterday`, else `Tuesday 24 November`, with the year when it is not the current one. */
export function formatDayTitle(time: number | string, timeZone: string, nowMs: number): string {
  const day = inZone(time, timeZone).startOf('day');
  const daysAgo = inZone(nowMs, timeZone).startOf('day').diff(day, 'days').days;
  if (daysAgo === 0) return 'Today';
  return daysAgo === 1 ? 'Yesterday' : `${day.toFormat('cccc')} ${formatDay(time, timeZone, nowMs)}`;
}

/** `14:02` today, `Sunday 14:02` within the last or next six days, else `9 March, 14:02`. */
export function formatNear(time: number | string, timeZone: string, nowMs: number): string {
  const at = inZone(time, timeZone);
  const daysAway = Math.abs(at.startOf('day').diff(inZone(nowMs, timeZone).startOf('day'), 'days').days);
  if (daysAway === 0) return at.toFormat('HH:mm');
  return daysAway <= 6 ? at.toFormat('cccc HH:mm') : formatDayAndClock(time, timeZone, nowMs);
}

const counted = (count: number, one: string, many = `${one}s`) => `${count} ${count === 1 ? one : many}`;

/** How old something is, in words: `12 s`, `4 min`, `3 h`, `2 days`. */
export function ageWords(ageMs: number): string {
  const age = Math.max(0, ageMs);
  if (age < minuteMs) return `${Math.floor(age / 1000)} s`;
  if (age < hourMs) return `${Math.floor(age / minuteMs)} min`;
  if (age < dayMs) return `${Math.floor(age / hourMs)} h`;
  return counted(Math.floor(age / dayMs), 'day');
}

/** `4 min ago` below a day, else `9 March, 14:02`; `just now` for what is younger than 5 s or slightly ahead. */
export function formatAgo(time: number | string, timeZone: string, nowMs: number): string {
  const ageMs = nowMs - inZone(time, timeZone).toMillis();
  if (ageMs < 5000 && ageMs > -minuteMs) return 'just now';
  if (ageMs < 0 || ageMs >= dayMs) return formatDayAndClock(time, timeZone, nowMs);
  return `${ageWords(ageMs)} ago`;
}
