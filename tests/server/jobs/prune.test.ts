import { uuidv7 } from 'uuidv7';
import { afterEach, beforeEach, expect, it } from 'vitest';
import { recordChange } from '../../../server/changes/record-change.ts';
import { query } from '../../../server/db/open.ts';
import { manualClock, type ManualClock } from '../../helpers/core.ts';
import { startTestServer, type TestServer } from '../../helpers/server.ts';

const DAY_MS = 86_400_000;

let clock: ManualClock;
let server: TestServer;

beforeEach(async () => {
  clock = manualClock();
  server = await startTestServer({ clock });
});

afterEach(() => server.close());

async function count(table: 'change' | 'session' | 'sample' | 'rollup' | 'invite'): Promise<number> {
  const { n } = await server.core.reader
    .selectFrom(table)
    .select((eb) => eb.fn.countAll<number>().as('n'))
    .executeTakeFirstOrThrow();
  return n;
}

it('drops changes after a day, however many there are, and keeps the newer ones', async () => {
  await server.core.writer.commit((tx) => {
    for (let n = 0; n < 2_500; n += 1) recordChange(tx, { systemId: 's', type: 'plan', atMs: clock.nowMs(), data: { reason: 'old' } });
  });
  clock.advance(DAY_MS + 1);
  await server.core.writer.commit((tx) => recordChange(tx, { systemId: 's', type: 'plan', atMs: clock.nowMs(), data: { reason: 'new' } }));
  await server.context.jobs.run();
  expect(await count('change')).toBe(1);
});

it('drops sessions a month after their end, and no session that is open', async () => {
  const [ended, open] = [await server.person(), await server.person()];
  await ended.api('signOut');
  clock.advance(29 * DAY_MS);
  await server.context.jobs.run();
  expect(await count('session')).toBe(2);
  clock.advance(DAY_MS + 1);
  await server.context.jobs.run();
  const left = await server.core.reader.selectFrom('session').select('userId').execute();
  expect(left).toEqual([{ userId: open.id }]);
});

it('drops raw samples after 400 days and one-minute roll-ups after 30, and keeps the coarser levels', async () => {
  const { siteId, systemId, owner } = await server.household();
  const { device } = await owner.api('createDevice', { params: { systemId }, body: { name: 'Probes', kind: 'probe' } });
  const nowMs = clock.nowMs();
  const series = { key: 1, id: uuidv7(), siteId, systemId, deviceId: device.id, channel: 'ph', name: null, quantity: 'ph', unit: 'pH' };
  const figures = { count: 1, min: 8, max: 8, sum: 8, firstMs: nowMs, first: 8, lastMs: nowMs, last: 8 };
  await server.core.writer.commit((tx) => {
    tx.run(query.insertInto('series').values({ ...series, lastMs: nowMs, lastValue: 8, conflicts: 0, createdAtMs: nowMs }));
    tx.run(query.insertInto('sample').values({ seriesKey: 1, tMs: nowMs, value: 8, lagMs: 0 }));
    for (const levelMs of [60_000, 900_000, 3_600_000]) {
      tx.run(query.insertInto('rollup').values({ levelMs, seriesKey: 1, bucketMs: nowMs, ...figures }));
    }
  });
  const left = async () => [await count('sample'), await count('rollup')];
  clock.advance(30 * DAY_MS);
  await server.context.jobs.run();
  expect(await left()).toEqual([1, 3]);
  clock.advance(1);
  await server.context.jobs.run();
  expect(await left()).toEqual([1, 2]);
  clock.advance(370 * DAY_MS);
  await server.context.jobs.run();
  expect(await left()).toEqual([0, 2]);
});
