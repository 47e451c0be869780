import type { TimeRange } from './time-axis.ts';

/** A delivery, or all of a day's: drawn as a column from 0 up. */
export interface DoseColumn {
  readonly fromMs: number;
  readonly toMs: number;
  readonly pumpMl: number;
  readonly handMl: number;
}

/** The planned dose from a time on, until the next step. */
export interface PlanStep {
  readonly fromMs: number;
  readonly mlPerDay: number;
}

export interface DoseInput {
  readonly per: 'portion' | 'day';
  readonly columns: readonly DoseColumn[];
  /** Empty per portion: a day's plan has no height on an axis of single portions. */
  readonly steps: readonly PlanStep[];
}

export interface DoseBar {
  readonly kind: 'pump' | 'hand';
  readonly x: number;
  readonly y: number;
  readonly width: number;
  readonly height: number;
}

export interface DoseMarks {
  readonly bars: readonly DoseBar[];
  /** Corners of the step line of the plan. */
  readonly stepLine: readonly { readonly x: number; readonly y: number }[];
}

const portionWidthPx = 3;
/** Air on each side of a day's column. */
const dayInsetShare = 0.2;
const leastWidthPx = 1;

interface Lay {
  readonly range: TimeRange;
  readonly toX: (tMs: number) => number;
  readonly toY: (value: number) => number;
}

function bar(kind: DoseBar['kind'], x: number, width: number, ml: number, toY: Lay['toY']): DoseBar[] {
  if (ml <= 0) return [];
  return [{ kind, x, width: Math.max(width, leastWidthPx), y: toY(ml), height: toY(0) - toY(ml) }];
}

/** Pump and hand stand side by side, never on top of each other: each height is read from the same zero. */
function barsOf(column: DoseColumn, per: DoseInput['per'], { toX, toY }: Lay): DoseBar[] {
  const x = toX(column.fromMs);
  if (per === 'portion') {
    const left = x - portionWidthPx / 2;
    return [...bar('pump', left, portionWidthPx, column.pumpMl, toY), ...bar('hand', left, portionWidthPx + 2, column.handMl, toY)];
  }
  const room = toX(column.toMs) - x;
  const inset = room > 6 ? room * dayInsetShare : 0;
  const left = x + inset;
  const width = room - 2 * inset;
  const both = column.pumpMl > 0 && column.handMl > 0;
  if (!both) return [...bar('pump', left, width, column.pumpMl, toY), ...bar('hand', left, width, column.handMl, toY)];
  const half = width / 2;
  return [...bar('pump', left, half, column.pumpMl, toY), ...bar('hand', left + half, half, column.handMl, toY)];
}

function stepCorners(steps: readonly PlanStep[], { range, toX, toY }: Lay): { x: number; y: number }[] {
  const corners: { x: number; y: number }[] = [];
  steps.forEach((step, i) => {
    const untilMs = Math.min(steps[i + 1]?.fromMs ?? range.toMs, range.toMs);
    const fromMs = Math.max(step.fromMs, range.fromMs);
    if (untilMs <= fromMs) return;
    corners.push({ x: toX(fromMs), y: toY(step.mlPerDay) }, { x: toX(untilMs), y: toY(step.mlPerDay) });
  });
  return corners;
}

export function doseMarks(input: DoseInput, lay: Lay): DoseMarks {
  const seen = input.columns.filter((column) => column.toMs >= lay.range.fromMs && column.fromMs < lay.range.toMs);
  return { bars: seen.flatMap((column) => barsOf(column, input.per, lay)), stepLine: stepCorners(input.steps, lay) };
}
