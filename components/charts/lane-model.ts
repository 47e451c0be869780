import type { DoseInput, DoseMarks } from './dose-bars.ts';
import { doseMarks } from './dose-bars.ts';
import type { TestMarks, TestPoint, TestsInput } from './test-marks.ts';
import { testMarks } from './test-marks.ts';
import type { TimeRange } from './time-axis.ts';
import { timeScale } from './time-axis.ts';
import type { TimeTick } from './time-ticks.ts';
import { timeTicks } from './time-ticks.ts';
import type { Trace, TraceInput } from './trace-model.ts';
import { traceOf } from './trace-model.ts';
import type { ValueTick } from './value-axis.ts';
import { valueAxis } from './value-axis.ts';

export interface Band {
  readonly low: number;
  readonly high: number;
  /** "aim 3 to 10". */
  readonly label: string;
}

export interface LimitInput {
  readonly kind: 'soft' | 'hard';
  readonly value: number;
  readonly label: string;
}

/** One kind of quantity over time, in its own unit, as data. */
export interface LaneInput {
  readonly id: string;
  readonly title: string;
  readonly unit: string;
  /** How many decimals the instrument can know. */
  readonly decimals: number;
  readonly fromZero: boolean;
  readonly leastSpan: number;
  readonly band: Band | null;
  readonly limits: readonly LimitInput[];
  readonly traces: readonly TraceInput[];
  readonly tests: TestsInput | null;
  readonly doses: DoseInput | null;
}

export interface LaneFrame {
  readonly range: TimeRange;
  readonly zone: string;
  readonly widthPx: number;
  readonly heightPx: number;
  /** The reader's text size: room for labels grows with it. 16 where nobody changed it. */
  readonly remPx: number;
}

export interface LimitLine {
  readonly kind: 'soft' | 'hard';
  readonly y: number;
  readonly label: string;
}

/** One lane in pixels: all that a painter needs, whichever it is. */
export interface LaneModel {
  readonly id: string;
  readonly title: string;
  readonly unit: string;
  readonly widthPx: number;
  readonly heightPx: number;
  readonly plot: { readonly left: number; readonly top: number; readonly right: number; readonly bottom: number };
  readonly values: { readonly low: number; readonly high: number };
  readonly valueTicks: readonly ValueTick[];
  readonly timeTicks: readonly (TimeTick & { readonly x: number })[];
  readonly band: { readonly top: number; readonly bottom: number; readonly label: string } | null;
  readonly limits: readonly LimitLine[];
  readonly traces: readonly Trace[];
  readonly tests: TestMarks | null;
  readonly doses: DoseMarks | null;
  /** Said in a lane that has nothing to show; null where it has. */
  readonly emptyWords: string | null;
}

/** Room for the values at the left, the same in every lane so that their times line up. */
const gutterRem = 3;
const edgePx = { top: 8, right: 8, bottom: 8 };
const remPerTimeTick = 4.4;
const remPerValueTick = 2.3;
/** A lane holds no more: the fourth line in one colour cannot be told from the others. */
const mostTraces = 3;

export function plotOf({ widthPx, heightPx, remPx }: Pick<LaneFrame, 'widthPx' | 'heightPx' | 'remPx'>): LaneModel['plot'] {
  const left = gutterRem * remPx;
  return {
    left,
    top: edgePx.top,
    right: Math.max(left + 1, widthPx - edgePx.right),
    bottom: Math.max(edgePx.top + 1, heightPx - edgePx.bottom),
  };
}

/** The ticks of the shared time axis with their places. */
export function placedTimeTicks(frame: LaneFrame): (TimeTick & { x: number })[] {
  const plot = plotOf(frame);
  const widthPx = plot.right - plot.left;
  const scale = timeScale(frame.range, plot.left, widthPx);
  return timeTicks(frame.range, frame.zone, widthPx / (remPerTimeTick * frame.remPx)).map((tick) => ({ ...tick, x: scale.toX(tick.tMs) }));
}

function isSeen(tMs: number, range: TimeRange): boolean {
  return tMs >= range.fromMs && tMs <= range.toMs;
}

/** Tests in the range and their neighbours on both sides, whose lines cross it. */
function testsInSight(points: readonly TestPoint[], range: TimeRange): TestPoint[] {
  const before = points
    .filter((point) => point.tMs < range.fromMs)
    .reduce<TestPoint | null>((last, one) => (last && last.tMs > one.tMs ? last : one), null);
  const after = points
    .filter((point) => point.tMs > range.toMs)
    .reduce<TestPoint | null>((first, one) => (first && first.tMs < one.tMs ? first : one), null);
  const isCrossed = before !== null && after !== null && !before.below && !after.below;
  const seen = points.filter((point) => isSeen(point.tMs, range));
  const neighbours = [before, after].filter((point) => point !== null && (seen.length > 0 || isCrossed));
  return [...seen, ...neighbours.filter((point) => point !== null)];
}

/** What the value axis has to reach: everything in sight, the band and the limits. */
function valuesInSight(lane: LaneInput, range: TimeRange): number[] {
  const tests = testsInSight(lane.tests?.points ?? [], range);
  const columns = lane.doses?.columns.filter((column) => column.toMs >= range.fromMs && column.fromMs < range.toMs) ?? [];
  const steps =
    lane.doses?.steps.filter((step, i, all) => step.fromMs < range.toMs && (all[i + 1]?.fromMs ?? Infinity) > range.fromMs) ?? [];
  return [
    ...lane.traces.flatMap(({ columns: { t, min, max, resolutionMs } }) =>
      t.flatMap((tMs, i) => (isSeen(tMs + resolutionMs / 2, range) ? [min[i] ?? NaN, max[i] ?? NaN] : [])),
    ),
    ...tests.flatMap((point) => [point.value, point.value + (point.uncertainty ?? 0)]),
    ...columns.flatMap((column) => [column.pumpMl, column.handMl]),
    ...steps.map((step) => step.mlPerDay),
    ...(lane.band ? [lane.band.low, lane.band.high] : []),
    ...lane.limits.map((limit) => limit.value),
  ];
}

/** `ticks` are those of the frame; a stack makes them once for all its lanes. */
export function laneModel(lane: LaneInput, frame: LaneFrame, ticks: LaneModel['timeTicks'] = placedTimeTicks(frame)): LaneModel {
  const { range, widthPx, heightPx } = frame;
  const plot = plotOf(frame);
  const plotHeight = plot.bottom - plot.top;
  const { toX } = timeScale(range, plot.left, plot.right - plot.left);
  const axis = valueAxis({
    values: valuesInSight(lane, range),
    fromZero: lane.fromZero,
    leastSpan: lane.leastSpan,
    topPx: plot.top,
    heightPx: plotHeight,
    tickCount: Math.max(2, Math.round(plotHeight / (remPerValueTick * frame.remPx))),
  });
  const { toY } = axis;
  return {
    id: lane.id,
    title: lane.title,
    unit: lane.unit,
    widthPx,
    heightPx,
    plot,
    values: { low: axis.low, high: axis.high },
    valueTicks: axis.ticks,
    timeTicks: ticks,
    band: lane.band && { top: toY(lane.band.high), bottom: toY(lane.band.low), label: lane.band.label },
    limits: lane.limits.map((limit) => ({ kind: limit.kind, y: toY(limit.value), label: limit.label })),
    traces: lane.traces.slice(0, mostTraces).map((trace) => traceOf(trace, toX, toY, plot)),
    tests: lane.tests && testMarks(lane.tests, toX, toY),
    emptyWords: lane.tests?.points.length === 0 ? 'no test yet' : null,
    doses: lane.doses && doseMarks(lane.doses, { range, toX, toY }),
  };
}
