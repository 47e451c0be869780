import type { Point } from './trace-model.ts';

export interface TestPoint {
  readonly id: string;
  readonly tMs: number;
  readonly value: number;
  /** True: the result is "under `value`", a result of its own: never drawn or counted as a number. */
  readonly below: boolean;
  readonly edited: boolean;
  /** Half the width of the kit's uncertainty in the unit of `value`, where it is known. */
  readonly uncertainty?: number;
}

export type TestShape = 'circle' | 'square';

export interface TestsInput {
  readonly shape: TestShape;
  readonly dashed: boolean;
  readonly points: readonly TestPoint[];
}

export interface TestMark extends Point {
  readonly id: string;
  readonly shape: TestShape;
  readonly below: boolean;
  readonly edited: boolean;
  readonly whisker: { readonly top: number; readonly bottom: number } | null;
}

/** The mean of tests that repeat one another. */
export interface MeanBar {
  readonly x1: number;
  readonly x2: number;
  readonly y: number;
}

export interface TestMarks {
  readonly shape: TestShape;
  readonly dashed: boolean;
  readonly marks: readonly TestMark[];
  readonly meanBars: readonly MeanBar[];
  /** Lines through results that follow one another; one below detection breaks the line, since its value is unknown. */
  readonly lines: readonly (readonly Point[])[];
}

/** Tests of one nutrient this close together repeat one another. */
export const repeatWithinMs = 3_600_000;

const meanBarOverhangPx = 6;

/** Tests in groups: each begins a new one unless it is within an hour of the first of its group. */
export function clusterTests(points: readonly TestPoint[]): TestPoint[][] {
  const clusters: TestPoint[][] = [];
  for (const point of [...points].sort((a, b) => a.tMs - b.tMs)) {
    const last = clusters.at(-1);
    const first = last?.[0];
    if (last && first && point.tMs - first.tMs <= repeatWithinMs) last.push(point);
    else clusters.push([point]);
  }
  return clusters;
}

export function meanOf(values: readonly number[]): number | null {
  return values.length === 0 ? null : values.reduce((sum, value) => sum + value, 0) / values.length;
}

export function testMarks(input: TestsInput, toX: (tMs: number) => number, toY: (value: number) => number): TestMarks {
  const meanBars: MeanBar[] = [];
  const lines: Point[][] = [];
  let line: Point[] = [];
  const clusters = clusterTests(input.points);
  for (const cluster of clusters) {
    const measured = cluster.filter((point) => !point.below);
    const mean = meanOf(measured.map((point) => point.value));
    if (mean === null) {
      lines.push(line);
      line = [];
      continue;
    }
    const xs = measured.map((point) => toX(point.tMs));
    const x1 = Math.min(...xs);
    const x2 = Math.max(...xs);
    if (measured.length > 1) meanBars.push({ x1: x1 - meanBarOverhangPx, x2: x2 + meanBarOverhangPx, y: toY(mean) });
    line.push({ x: (x1 + x2) / 2, y: toY(mean) });
  }
  lines.push(line);
  const marks = clusters.flat().map((point) => ({
    id: point.id,
    shape: input.shape,
    x: toX(point.tMs),
    y: toY(point.value),
    below: point.below,
    edited: point.edited,
    whisker: whiskerOf(point, toY),
  }));
  return { shape: input.shape, dashed: input.dashed, marks, meanBars, lines: lines.filter((points) => points.length > 1) };
}

function whiskerOf(point: TestPoint, toY: (value: number) => number): TestMark['whisker'] {
  if (point.below || !point.uncertainty) return null;
  return { top: toY(point.value + point.uncertainty), bottom: toY(Math.max(0, point.value - point.uncertainty)) };
}
