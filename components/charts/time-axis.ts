import { scaleLinear } from 'd3-scale';

/** What a chart shows: from inclusive, to exclusive, epoch milliseconds. All lanes of a stack share one. */
export interface TimeRange {
  readonly fromMs: number;
  readonly toMs: number;
}

/** How far a range may be moved and stretched. */
export interface AxisLimits {
  readonly earliestMs: number;
  readonly latestMs: number;
  readonly minSpanMs: number;
  readonly maxSpanMs: number;
}

export function spanOf(range: TimeRange): number {
  return range.toMs - range.fromMs;
}

/** The nearest range that keeps to the limits: first the span is fitted, then the whole is shifted, never squeezed. */
export function clampRange(range: TimeRange, limits: AxisLimits): TimeRange {
  const room = limits.latestMs - limits.earliestMs;
  const widest = Math.max(limits.minSpanMs, Math.min(limits.maxSpanMs, room));
  const spanMs = Math.min(Math.max(spanOf(range), limits.minSpanMs), widest);
  const centreMs = (range.fromMs + range.toMs) / 2;
  const wantedFromMs = spanMs === spanOf(range) ? range.fromMs : centreMs - spanMs / 2;
  const latestFromMs = Math.max(limits.earliestMs, limits.latestMs - spanMs);
  const fromMs = Math.round(Math.min(Math.max(wantedFromMs, limits.earliestMs), latestFromMs));
  return { fromMs, toMs: fromMs + Math.round(spanMs) };
}

export function panBy(range: TimeRange, deltaMs: number, limits: AxisLimits): TimeRange {
  return clampRange({ fromMs: range.fromMs + deltaMs, toMs: range.toMs + deltaMs }, limits);
}

/** Stretches the range by `factor` (above 1 shows more time) so that `anchorMs` keeps its place on the screen. */
export function zoomAbout(range: TimeRange, factor: number, anchorMs: number, limits: AxisLimits): TimeRange {
  const widest = Math.min(limits.maxSpanMs, limits.latestMs - limits.earliestMs);
  const spanMs = Math.min(Math.max(spanOf(range) * factor, limits.minSpanMs), Math.max(widest, limits.minSpanMs));
  const share = (anchorMs - range.fromMs) / spanOf(range);
  const fromMs = anchorMs - share * spanMs;
  return clampRange({ fromMs, toMs: fromMs + spanMs }, limits);
}

/**
 * The range after two fingers moved from one pair of places to another: the time under their middle stays under it,
 * and the span changes as their distance does. Places are fractions of the plot's width.
 */
export function pinch(
  start: TimeRange,
  before: readonly [number, number],
  after: readonly [number, number],
  limits: AxisLimits,
): TimeRange {
  const leastApart = 0.02;
  const apartBefore = Math.max(Math.abs(before[1] - before[0]), leastApart);
  const apartAfter = Math.max(Math.abs(after[1] - after[0]), leastApart);
  const middleMs = start.fromMs + ((before[0] + before[1]) / 2) * spanOf(start);
  const stretched = zoomAbout(start, apartBefore / apartAfter, middleMs, limits);
  const movedBy = (after[0] + after[1] - before[0] - before[1]) / 2;
  return panBy(stretched, -movedBy * spanOf(stretched), limits);
}

export interface TimeScale {
  readonly toX: (tMs: number) => number;
  readonly toMs: (x: number) => number;
}

export function timeScale(range: TimeRange, leftPx: number, widthPx: number): TimeScale {
  const scale = scaleLinear()
    .domain([range.fromMs, range.toMs])
    .range([leftPx, leftPx + widthPx]);
  return { toX: (tMs) => scale(tMs), toMs: (x) => scale.invert(x) };
}
