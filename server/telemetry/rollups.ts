import type { Transaction } from '../db/writer.ts';
import type { NewSample } from './sample-store.ts';

export const MINUTE_LEVEL_MS = 60_000;
export const QUARTER_LEVEL_MS = 900_000;
export const HOUR_LEVEL_MS = 3_600_000;
/** The finest level adds a third to the file, and is kept only this long; the others are kept for good. */
export const MINUTE_LEVEL_KEPT_MS = 30 * 86_400_000;

interface Bucket {
  bucketMs: number;
  count: number;
  min: number;
  max: number;
  sum: number;
  first: NewSample;
  last: NewSample;
}

/** Everything that two parts of a bucket can be merged from, in whichever order they come: never a mean. */
const upsertSql = `insert into rollup (levelMs, seriesKey, bucketMs, count, min, max, sum, firstMs, first, lastMs, last)
  values (?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?)
  on conflict do update set
    count = count + excluded.count, min = min(min, excluded.min), max = max(max, excluded.max), sum = sum + excluded.sum,
    first = case when excluded.firstMs < firstMs then excluded.first else first end, firstMs = min(firstMs, excluded.firstMs),
    last = case when excluded.lastMs > lastMs then excluded.last else last end, lastMs = max(lastMs, excluded.lastMs)`;

function* bucketsOf(samples: readonly NewSample[], levelMs: number): Generator<Bucket> {
  let open: Bucket | null = null;
  for (const sample of samples) {
    const bucketMs = sample.tMs - (sample.tMs % levelMs);
    if (open !== null && open.bucketMs === bucketMs) {
      open.count += 1;
      open.min = Math.min(open.min, sample.value);
      open.max = Math.max(open.max, sample.value);
      open.sum += sample.value;
      open.last = sample;
      continue;
    }
    if (open !== null) yield open;
    const { value } = sample;
    open = { bucketMs, count: 1, min: value, max: value, sum: value, first: sample, last: sample };
  }
  if (open !== null) yield open;
}

/** Adds newly stored samples, in chronological order, to the roll-ups of their series: one statement a bucket, not a sample. */
export function addToRollups(tx: Transaction, seriesKey: number, stored: readonly NewSample[], nowMs: number): void {
  if (stored.length === 0) return;
  const upsert = tx.prepare(upsertSql);
  const minutesFromMs = nowMs - MINUTE_LEVEL_KEPT_MS;
  for (const levelMs of [MINUTE_LEVEL_MS, QUARTER_LEVEL_MS, HOUR_LEVEL_MS]) {
    for (const bucket of bucketsOf(stored, levelMs)) {
      if (levelMs === MINUTE_LEVEL_MS && bucket.bucketMs < minutesFromMs) continue;
      const { bucketMs, count, min, max, sum, first, last } = bucket;
      upsert.run(levelMs, seriesKey, bucketMs, count, min, max, sum, first.tMs, first.value, last.tMs, last.value);
    }
  }
}
