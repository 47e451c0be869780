import type { Columns, Gap, Stretch } from './gaps.ts';
import { spanWords, splitAtGaps } from './gaps.ts';
import { reduceColumns } from './reduce-columns.ts';
import type { TimeScale } from './time-axis.ts';

export interface Point {
  readonly x: number;
  readonly y: number;
}

export interface TraceInput {
  readonly id: string;
  readonly label: string;
  readonly dashed: boolean;
  readonly columns: Columns;
}

/** One unbroken stretch of a trace, in pixels. */
export interface TraceStretch {
  readonly mean: readonly Point[];
  /** Least and greatest value at each point; empty where every sample is drawn. */
  readonly low: readonly Point[];
  readonly high: readonly Point[];
}

export interface GapMark {
  readonly x1: number;
  readonly x2: number;
  /** "no data 3 h", or null where the words do not fit between the end ticks. */
  readonly label: string | null;
}

export interface Trace {
  readonly id: string;
  readonly label: string;
  readonly dashed: boolean;
  readonly reduced: boolean;
  readonly columns: Columns;
  readonly stretches: readonly TraceStretch[];
  readonly gaps: readonly GapMark[];
}

/** What a painter can draw of one series without dropping frames. */
export const mostPointsPerSeries = 2000;

const labelRoomPx = 96;

export function gapMarks(gaps: readonly Gap[], toX: TimeScale['toX'], leftPx: number, rightPx: number): GapMark[] {
  return gaps
    .map((gap) => {
      const x1 = Math.max(leftPx, toX(gap.fromMs));
      const x2 = Math.min(rightPx, toX(gap.toMs));
      return { x1, x2, label: x2 - x1 >= labelRoomPx ? `no data ${spanWords(gap.toMs - gap.fromMs)}` : null };
    })
    .filter((mark) => mark.x2 - mark.x1 >= 1);
}

/** Breaks a series at its gaps; buckets get an envelope of their extremes, raw samples are drawn as they are. */
export function traceOf(
  input: TraceInput,
  toX: TimeScale['toX'],
  toY: (value: number) => number,
  plot: { left: number; right: number },
): Trace {
  const columns = reduceColumns(input.columns, mostPointsPerSeries);
  const { stretches, gaps } = splitAtGaps(columns);
  const reduced = columns.resolutionMs > 0;
  // A bucket stands for its whole width, so it is drawn at its middle.
  const xs = columns.t.map((tMs) => toX(tMs + columns.resolutionMs / 2));
  const points = (values: readonly number[], stretch: Stretch): Point[] =>
    values.slice(stretch.start, stretch.end).map((value, i) => ({ x: xs[stretch.start + i] ?? 0, y: toY(value) }));
  return {
    id: input.id,
    label: input.label,
    dashed: input.dashed,
    reduced,
    columns,
    stretches: stretches.map((stretch) => ({
      mean: points(columns.mean, stretch),
      low: reduced ? points(columns.min, stretch) : [],
      high: reduced ? points(columns.max, stretch) : [],
    })),
    gaps: gapMarks(gaps, toX, plot.left, plot.right),
  };
}
