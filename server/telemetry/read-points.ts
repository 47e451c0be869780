import type SqliteConnection from 'better-sqlite3';
import type { Points } from '#shared/contract/telemetry.ts';
import { HOUR_LEVEL_MS, MINUTE_LEVEL_KEPT_MS, MINUTE_LEVEL_MS, QUARTER_LEVEL_MS } from './rollups.ts';

export interface PointsRequest {
  seriesKey: number;
  /** Inclusive. */
  fromMs: number;
  /** Exclusive. */
  toMs: number;
  /** The most points to answer with. */
  points: number;
  nowMs: number;
}

interface BucketRow {
  t: number;
  min: number;
  max: number;
  sum: number;
  count: number;
}

const rawSql = 'select tMs as t, value from sample where seriesKey = ? and tMs >= ? and tMs < ? order by tMs limit ?';

/**
 * Whole buckets of the level come from its roll-ups, what the range cuts off at either end from the samples, so that
 * exactly the samples in the range are told. Numbers bind as floats: the casts keep the division one of integers.
 */
const bucketsSql = `
  select bucketMs - bucketMs % cast(@widthMs as integer) as t, min(low) as min, max(high) as max, sum(total) as sum, sum(many) as count
  from (
    select bucketMs, min as low, max as high, sum as total, count as many from rollup
      where levelMs = @levelMs and seriesKey = @seriesKey and bucketMs >= @wholeFromMs and bucketMs < @wholeToMs
    union all
    select tMs, value, value, value, 1 from sample where seriesKey = @seriesKey and tMs >= @fromMs and tMs < min(@wholeFromMs, @toMs)
    union all
    select tMs, value, value, value, 1 from sample where seriesKey = @seriesKey and tMs >= max(@wholeToMs, @wholeFromMs) and tMs < @toMs
  ) group by t order by t`;

/** How many buckets of this width, aligned to the epoch, the range touches. */
const bucketsIn = (fromMs: number, toMs: number, widthMs: number) => Math.floor((toMs - 1) / widthMs) - Math.floor(fromMs / widthMs) + 1;

/**
 * The narrowest buckets of which at most `points` cover the range: a multiple of a stored level. The minute level serves
 * only as far back as it is kept.
 */
export function bucketWidthMs({ fromMs, toMs, points, nowMs }: Omit<PointsRequest, 'seriesKey'>): number {
  const finestMs = fromMs >= nowMs - MINUTE_LEVEL_KEPT_MS ? MINUTE_LEVEL_MS : QUARTER_LEVEL_MS;
  let widthMs = Math.max(1, Math.floor((toMs - fromMs) / points / finestMs)) * finestMs;
  while (bucketsIn(fromMs, toMs, widthMs) > points) widthMs += finestMs;
  return widthMs;
}

/** Samples as they are when at most `points` lie in the range, else buckets. Empty buckets are left out. */
export function readPoints(connection: SqliteConnection.Database, request: PointsRequest): Points {
  const { seriesKey, fromMs, toMs, points } = request;
  const raw = connection.prepare(rawSql).all(seriesKey, fromMs, toMs, points + 1) as { t: number; value: number }[];
  if (raw.length <= points) {
    const values = raw.map((sample) => sample.value);
    return { resolutionMs: 0, t: raw.map((sample) => sample.t), min: values, mean: values, max: values, count: raw.map(() => 1) };
  }
  const widthMs = bucketWidthMs(request);
  // The coarsest level that divides the width gives the same answer from the fewest rows.
  const levelMs = [HOUR_LEVEL_MS, QUARTER_LEVEL_MS].find((level) => widthMs % level === 0) ?? MINUTE_LEVEL_MS;
  const rows = connection.prepare(bucketsSql).all({
    seriesKey,
    fromMs,
    toMs,
    widthMs,
    levelMs,
    wholeFromMs: Math.ceil(fromMs / levelMs) * levelMs,
    wholeToMs: Math.floor(toMs / levelMs) * levelMs,
  }) as BucketRow[];
  return {
    resolutionMs: widthMs,
    t: rows.map((row) => row.t),
    min: rows.map((row) => row.min),
    mean: rows.map((row) => row.sum / row.count),
    max: rows.map((row) => row.max),
    count: rows.map((row) => row.count),
  };
}
