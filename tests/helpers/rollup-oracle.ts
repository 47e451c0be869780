import type { Core } from '../../server/core.ts';
import type { Row } from '../../server/db/schema.ts';

type RollupRow = Row<'rollup'>;

const order = (one: RollupRow, other: RollupRow) =>
  one.levelMs - other.levelMs || one.seriesKey - other.seriesKey || one.bucketMs - other.bucketMs;

export async function storedRollups({ reader }: Pick<Core, 'reader'>): Promise<RollupRow[]> {
  return (await reader.selectFrom('rollup').selectAll().execute()).sort(order);
}

/** What the roll-ups must be, from the samples alone and by no code of the product. Sums are exact for short binary fractions. */
export async function rollupsFromRaw({ reader }: Pick<Core, 'reader'>): Promise<RollupRow[]> {
  const samples = await reader.selectFrom('sample').selectAll().orderBy('seriesKey').orderBy('tMs').execute();
  const buckets = new Map<string, RollupRow>();
  for (const levelMs of [60_000, 900_000, 3_600_000]) {
    for (const { seriesKey, tMs, value } of samples) {
      const bucketMs = Math.floor(tMs / levelMs) * levelMs;
      const key = `${levelMs} ${seriesKey} ${bucketMs}`;
      const before = buckets.get(key);
      buckets.set(key, {
        levelMs,
        seriesKey,
        bucketMs,
        count: (before?.count ?? 0) + 1,
        min: Math.min(before?.min ?? value, value),
        max: Math.max(before?.max ?? value, value),
        sum: (before?.sum ?? 0) + value,
        firstMs: before?.firstMs ?? tMs,
        first: before?.first ?? value,
        lastMs: tMs,
        last: value,
      });
    }
  }
  return [...buckets.values()].sort(order);
}
