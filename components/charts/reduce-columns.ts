import type { Columns } from './gaps.ts';
import { splitAtGaps } from './gaps.ts';

function at(column: readonly number[], i: number): number {
  return column[i] ?? 0;
}

/**
 * At most about `maxPoints` entries, by merging neighbours into one with their extremes and their mean weighted by
 * count, never across a gap; what is few enough is left as it is. A merged entry carries the time of its first.
 */
export function reduceColumns(columns: Columns, maxPoints: number): Columns {
  if (columns.t.length <= maxPoints) return columns;
  const size = Math.ceil(columns.t.length / maxPoints);
  const out = { t: [] as number[], min: [] as number[], mean: [] as number[], max: [] as number[], count: [] as number[] };
  let widestMs = columns.resolutionMs;
  for (const stretch of splitAtGaps(columns).stretches) {
    for (let start = stretch.start; start < stretch.end; start += size) {
      const end = Math.min(start + size, stretch.end);
      const count = columns.count.slice(start, end).reduce((sum, n) => sum + n, 0);
      const weighted = columns.mean.slice(start, end).reduce((sum, mean, i) => sum + mean * at(columns.count, start + i), 0);
      out.t.push(at(columns.t, start));
      out.min.push(Math.min(...columns.min.slice(start, end)));
      out.max.push(Math.max(...columns.max.slice(start, end)));
      out.mean.push(count === 0 ? at(columns.mean, start) : weighted / count);
      out.count.push(count);
      widestMs = Math.max(widestMs, at(columns.t, end - 1) - at(columns.t, start) + columns.resolutionMs);
    }
  }
  return { resolutionMs: widestMs, ...out };
}
