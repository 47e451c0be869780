import { uuidv7 } from 'uuidv7';
import type { Points } from '#shared/contract/telemetry.ts';
import { openReadingConnection, query } from '../../server/db/open.ts';
import { readPoints } from '../../server/telemetry/read-points.ts';
import { sqliteSampleStore } from '../../server/telemetry/sample-store.ts';
import type { BenchPlace } from './bench-place.ts';
import { type Ratio, ratioOf } from './ratio.ts';

const DAY_MS = 86_400_000;
const RANGE_MS = 90 * DAY_MS;
const EVERY_MS = 15_000;
const BATCH = 5_760;
const ROUNDS = 7;

/** The same buckets from the samples themselves; the cast keeps the division one of integers. */
const rawSql = `select tMs - tMs % cast(? as integer) as t, min(value) as min, sum(value) / count(*) as mean, max(value) as max,
  count(*) as count from sample where seriesKey = ? and tMs >= ? and tMs < ? group by t order by t`;

async function fill(place: BenchPlace, untilMs: number): Promise<number> {
  const { writer } = place.core;
  const { siteId, systemId, deviceId } = await place.addPump();
  const nothingYet = { name: null, lastMs: null, lastValue: null, conflicts: 0, createdAtMs: untilMs };
  const row = { id: uuidv7(), siteId, systemId, deviceId, channel: 'temperature', quantity: 'temperature', unit: 'degC', ...nothingYet };
  const seriesKey = await writer.commit((tx) => Number(tx.run(query.insertInto('series').values(row)).lastInsertRowid));
  for (let fromMs = untilMs - RANGE_MS; fromMs < untilMs; fromMs += BATCH * EVERY_MS) {
    const samples = Array.from({ length: BATCH }, (_, index) => {
      const tMs = fromMs + index * EVERY_MS;
      // One decimal more than a probe shows, over a day's swing: numbers of the length that real ones have.
      return { tMs, value: Math.round((25 + Math.sin((tMs / DAY_MS) * 2 * Math.PI) / 2 + (index % 7) / 100) * 1000) / 1000 };
    });
    await writer.commit((tx) => sqliteSampleStore.append(tx, seriesKey, samples, untilMs, untilMs));
  }
  return seriesKey;
}

/** 90 days of a series of one sample in 15 s, as a chart asks for it. Also returns that answer. */
export async function benchNinetyDays(place: BenchPlace): Promise<{ ratio: Ratio; points: Points }> {
  const untilMs = Math.floor(place.core.clock.nowMs() / DAY_MS) * DAY_MS;
  const seriesKey = await fill(place, untilMs);
  const connection = openReadingConnection(place.core.databaseFile);
  try {
    const request = { seriesKey, fromMs: untilMs - RANGE_MS, toMs: untilMs, points: 1000, nowMs: place.core.clock.nowMs() };
    const points = readPoints(connection, request);
    const raw = () =>
      connection.prepare(rawSql).all(points.resolutionMs, seriesKey, request.fromMs, request.toMs) as {
        t: number;
        max: number;
        count: number;
      }[];
    const told = JSON.stringify(points.t.map((t, index) => [t, points.max[index], points.count[index]]));
    if (told !== JSON.stringify(raw().map(({ t, max, count }) => [t, max, count])))
      throw new Error('Roll-ups and samples tell different things');

    const rounds = Array.from({ length: ROUNDS }, () => {
      const beganMs = performance.now();
      raw();
      const betweenMs = performance.now();
      readPoints(connection, request);
      return (betweenMs - beganMs) / (performance.now() - betweenMs);
    });
    const means = `time for 90 days of a series (${RANGE_MS / EVERY_MS} samples, ${points.t.length} points): from the samples against from the roll-ups`;
    return { ratio: ratioOf('ninety-days', means, rounds), points };
  } finally {
    connection.close();
  }
}
