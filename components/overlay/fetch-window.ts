import type { TimeRange } from '../charts/time-axis.ts';
import { spanOf } from '../charts/time-axis.ts';
import { mostPointsPerSeries } from '../charts/trace-model.ts';

const quarterHourMs = 900_000;
const dayMs = 86_400_000;
/** From here on a day is a few pixels wide, and its swing would fill the lane: days are shown by their mean and extremes. */
const byDayFromMs = 120 * dayMs;

/**
 * What to ask the server for so that a range can be shown and panned a little: about a quarter of it more on each side, on a grid,
 * so that small moves ask for the same window again and find it in the cache, and live samples still fall inside it.
 */
export function fetchWindow(range: TimeRange): TimeRange {
  let gridMs = quarterHourMs;
  while (gridMs < spanOf(range) / 4) gridMs *= 2;
  return {
    fromMs: Math.floor((range.fromMs - gridMs / 2) / gridMs) * gridMs,
    toMs: Math.ceil((range.toMs + gridMs / 2) / gridMs) * gridMs,
  };
}

/** How many points to ask for: as many as can be drawn, or one a day. */
export function pointCount(range: TimeRange): number {
  if (spanOf(range) < byDayFromMs) return mostPointsPerSeries;
  return Math.min(mostPointsPerSeries, Math.ceil(spanOf(fetchWindow(range)) / dayMs) + 1);
}
