/** Columns of one series, as the API gives them: ascending times, one entry per sample or bucket. */
export interface Columns {
  /** 0 for raw samples, else the width of a bucket. */
  readonly resolutionMs: number;
  readonly t: readonly number[];
  readonly min: readonly number[];
  readonly mean: readonly number[];
  readonly max: readonly number[];
  readonly count: readonly number[];
}

/** A stretch without a gap: indexes into the columns, `end` exclusive. */
export interface Stretch {
  readonly start: number;
  readonly end: number;
}

export interface Gap {
  readonly fromMs: number;
  readonly toMs: number;
}

const neighbours = 5;
const gapFactor = 3;

function median(values: readonly number[]): number {
  const sorted = [...values].sort((a, b) => a - b);
  return sorted[Math.floor(sorted.length / 2)] ?? 0;
}

/**
 * The usual distance around position `i`: the greater of the medians before and after it, so that a probe which
 * changes from one sample in 5 minutes to one in 10 seconds makes no gap, and never under the width of a bucket.
 */
function usualSpacing(distances: readonly number[], i: number, resolutionMs: number): number {
  const before = median(distances.slice(Math.max(0, i - neighbours), i));
  const after = median(distances.slice(i + 1, i + 1 + neighbours));
  return Math.max(before, after, resolutionMs);
}

interface Split {
  readonly stretches: readonly Stretch[];
  readonly gaps: readonly Gap[];
}

/** Columns are never changed in place, and a chart that is panned asks for the same ones sixty times a second. */
const known = new WeakMap<readonly number[], { resolutionMs: number; split: Split }>();

/** Where data is missing: a distance of more than three times the usual spacing or the width of a bucket. */
export function splitAtGaps(columns: Pick<Columns, 'resolutionMs' | 't'>): Split {
  const before = known.get(columns.t);
  if (before?.resolutionMs === columns.resolutionMs) return before.split;
  const split = findGaps(columns);
  known.set(columns.t, { resolutionMs: columns.resolutionMs, split });
  return split;
}

function findGaps({ t, resolutionMs }: Pick<Columns, 'resolutionMs' | 't'>): Split {
  if (t.length === 0) return { stretches: [], gaps: [] };
  const distances = t.slice(1).map((tMs, i) => tMs - (t[i] ?? tMs));
  const stretches: Stretch[] = [];
  const gaps: Gap[] = [];
  let start = 0;
  distances.forEach((distanceMs, i) => {
    const usualMs = usualSpacing(distances, i, resolutionMs);
    if (usualMs === 0 || distanceMs <= gapFactor * usualMs) return;
    stretches.push({ start, end: i + 1 });
    gaps.push({ fromMs: (t[i] ?? 0) + resolutionMs, toMs: t[i + 1] ?? 0 });
    start = i + 1;
  });
  stretches.push({ start, end: t.length });
  return { stretches, gaps };
}

/** A length of time in words, rounded down to its largest unit: "3 h", "45 min", "2 d". */
export function spanWords(spanMs: number): string {
  const seconds = Math.floor(spanMs / 1000);
  if (seconds < 60) return `${seconds} s`;
  if (seconds < 3600) return `${Math.floor(seconds / 60)} min`;
  if (seconds < 48 * 3600) return `${Math.floor(seconds / 3600)} h`;
  return `${Math.floor(seconds / 86_400)} d`;
}
