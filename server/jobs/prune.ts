import type { Core } from '../core.ts';

const HOUR_MS = 3_600_000;
const DAY_MS = 24 * HOUR_MS;
/** Rows a unit: small enough that nobody waits for it. */
const CHUNK = 1_000;

/** What is kept for a while only; the statements take the time before which rows go, and the most rows to take. */
const prunings = [
  { keepMs: DAY_MS, sqlText: 'delete from change where seq in (select seq from change where atMs < ? order by atMs limit ?)' },
  {
    keepMs: 30 * DAY_MS,
    sqlText: 'delete from session where id in (select id from session where coalesce(revokedAtMs, expiresAtMs) < ? limit ?)',
  },
  { keepMs: DAY_MS, sqlText: 'delete from invite where id in (select id from invite where expiresAtMs < ? limit ?)' },
];

/** By series, since that is how these rows lie on disk. */
const perSeries = [
  {
    keepMs: 400 * DAY_MS,
    sqlText: 'delete from sample where (seriesKey, tMs) in (select seriesKey, tMs from sample where seriesKey = ? and tMs < ? limit ?)',
  },
  {
    keepMs: 30 * DAY_MS,
    sqlText: `delete from rollup where (levelMs, seriesKey, bucketMs) in
      (select levelMs, seriesKey, bucketMs from rollup where levelMs = 60000 and seriesKey = ? and bucketMs < ? limit ?)`,
  },
];

/** Deletes what has passed its time, in small units, each of which lets others in between. */
export async function prune({ writer, reader, clock }: Core, isClosed: () => boolean): Promise<void> {
  async function inChunks(sqlText: string, ...parameters: (number | string)[]): Promise<void> {
    let deleted = CHUNK;
    while (deleted === CHUNK && !isClosed()) deleted = await writer.commit((tx) => tx.prepare(sqlText).run(...parameters, CHUNK).changes);
  }

  const nowMs = clock.nowMs();
  for (const { keepMs, sqlText } of prunings) await inChunks(sqlText, nowMs - keepMs);
  const series = await reader.selectFrom('series').select('key').execute();
  for (const { key } of series) for (const { keepMs, sqlText } of perSeries) await inChunks(sqlText, key, nowMs - keepMs);
}
