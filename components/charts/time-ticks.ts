import { DateTime } from 'luxon';
import type { TimeRange } from './time-axis.ts';
import { spanOf } from './time-axis.ts';

export interface TimeTick {
  readonly tMs: number;
  readonly label: string;
  /** Where a day (or for long ranges a month, a year) begins: drawn stronger. */
  readonly strong: boolean;
}

type Step = { readonly unit: 'minute' | 'day' | 'month'; readonly count: number; readonly aboutMs: number };

const minuteMs = 60_000;
const dayMs = 1440 * minuteMs;
const minutes = (count: number): Step => ({ unit: 'minute', count, aboutMs: count * minuteMs });
const days = (count: number): Step => ({ unit: 'day', count, aboutMs: count * dayMs });
const months = (count: number): Step => ({ unit: 'month', count, aboutMs: count * 30.44 * dayMs });

const steps: readonly Step[] = [
  ...[1, 2, 5, 10, 15, 30, 60, 120, 180, 360, 720].map(minutes),
  ...[1, 2, 4, 7, 14].map(days),
  ...[1, 2, 3, 6, 12, 24, 60].map(months),
];

function stepFor(spanMs: number, maxCount: number): Step {
  const last = months(120);
  return steps.find((step) => spanMs / step.aboutMs <= maxCount) ?? last;
}

/**
 * Both instants of a wall-clock time that a clock change repeats, none of one that it leaves out.
 * Luxon resolves a missing time forwards, which shows as another hour or minute than asked for.
 */
function instantsOf(dayStart: DateTime, minuteOfDay: number): DateTime[] {
  const hour = Math.floor(minuteOfDay / 60);
  const minute = minuteOfDay % 60;
  const at = dayStart.set({ hour, minute, second: 0, millisecond: 0 });
  if (at.hour !== hour || at.minute !== minute || !at.hasSame(dayStart, 'day')) return [];
  return at.getPossibleOffsets();
}

function minuteTicks(range: TimeRange, zone: string, stepMinutes: number): TimeTick[] {
  const ticks: TimeTick[] = [];
  let day = DateTime.fromMillis(range.fromMs, { zone }).startOf('day');
  while (day.toMillis() < range.toMs) {
    ticks.push({ tMs: day.toMillis(), label: day.toFormat('ccc d LLL'), strong: true });
    for (let minuteOfDay = stepMinutes; minuteOfDay < 1440; minuteOfDay += stepMinutes) {
      const instants = instantsOf(day, minuteOfDay);
      // A repeated hour shows twice only where its two ticks stand as far apart as all others.
      const shown = stepMinutes <= 60 ? instants : instants.slice(0, 1);
      shown.forEach((at, index) => {
        if (at.toMillis() === day.toMillis()) return;
        ticks.push({ tMs: at.toMillis(), label: index === 0 ? at.toFormat('HH:mm') : `${at.toFormat('HH:mm')} again`, strong: false });
      });
    }
    day = day.plus({ days: 1 }).startOf('day');
  }
  return ticks;
}

/** Every second day counts from a fixed day, weeks from a Monday, so that ticks stay put while the chart is panned. */
function dayTicks(range: TimeRange, zone: string, stepDays: number): TimeTick[] {
  const ticks: TimeTick[] = [];
  let day = DateTime.fromMillis(range.fromMs, { zone }).startOf('day');
  while (day.toMillis() < range.toMs) {
    const dayNumber = Math.round(Date.UTC(day.year, day.month - 1, day.day) / dayMs);
    // 1970-01-05, day number 4, was a Monday.
    if ((((dayNumber - 4) % stepDays) + stepDays) % stepDays === 0) {
      ticks.push({ tMs: day.toMillis(), label: day.toFormat('d LLL'), strong: day.day === 1 });
    }
    day = day.plus({ days: 1 }).startOf('day');
  }
  return ticks;
}

function monthTicks(range: TimeRange, zone: string, stepMonths: number): TimeTick[] {
  const ticks: TimeTick[] = [];
  let month = DateTime.fromMillis(range.fromMs, { zone }).startOf('month');
  while (month.toMillis() < range.toMs) {
    if ((month.year * 12 + month.month - 1) % stepMonths === 0) {
      const isYear = month.month === 1;
      ticks.push({ tMs: month.toMillis(), label: month.toFormat(isYear ? 'yyyy' : 'LLL'), strong: isYear });
    }
    month = month.plus({ months: 1 });
  }
  return ticks;
}

/**
 * Ticks at round wall-clock times of `zone`, at most about `maxCount`, also on the days on which the clock changes:
 * a missing hour has no tick, a repeated one has two, and midnight is where the day really begins.
 */
export function timeTicks(range: TimeRange, zone: string, maxCount: number): TimeTick[] {
  const step = stepFor(spanOf(range), Math.max(1, maxCount));
  const all =
    step.unit === 'minute'
      ? minuteTicks(range, zone, step.count)
      : step.unit === 'day'
        ? dayTicks(range, zone, step.count)
        : monthTicks(range, zone, step.count);
  return all.filter((tick) => tick.tMs >= range.fromMs && tick.tMs < range.toMs).sort((a, b) => a.tMs - b.tMs);
}
