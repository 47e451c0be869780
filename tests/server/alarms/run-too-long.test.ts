import { randomUUID } from 'node:crypto';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { evidenceOf } from '../../../server/alarms/alarm-row.ts';
import { query } from '../../../server/db/open.ts';
import { type Bench, DAY, openBench } from './alarm-bench.ts';

let bench: Bench;

beforeEach(async () => {
  bench = await openBench();
  await bench.schedule();
  await bench.giveOnTime(bench.clock.nowMs() - 8 * DAY, bench.clock.nowMs());
  await bench.alarms.start();
  await bench.alarms.tick();
});

afterEach(() => bench.close());

const tooLong = async () => (await bench.open()).filter((alarm) => alarm.code === 'run-too-long');

/** The portion of 0.5 mL at 1 mL/s: 0.5 s expected, too long after 10.75 s. */
const begin = (given: Partial<Parameters<Bench['run']>[0]> = {}) => {
  const begunMs = bench.clock.nowMs();
  return bench.run({ ml: 0, cause: 'schedule', scheduleVersion: 1, dueMs: begunMs, begunMs, endedMs: null, ...given });
};

describe('a run', () => {
  it('that never ends stops the pumps one and a half times its expected time and 10 s after it was heard to begin', async () => {
    const run = await begin();
    await bench.pass(10_000);
    expect(await tooLong()).toEqual([]);
    await bench.pass(1_000);
    const [alarm] = await tooLong();
    expect(alarm).toMatchObject({
      limitKind: 'hard',
      priority: 'urgent',
      latched: 1,
      target: `head:${bench.headId}`,
      unit: 's',
      limitValue: 10.75,
    });
    expect(alarm === undefined ? {} : evidenceOf(alarm)).toMatchObject({ by: 'time', run, head: 1, expectedSeconds: 0.5, isOver: false });
    expect(bench.port.stops.at(-1)).toMatchObject({ headConcerned: { deviceId: bench.pumpId, head: 1 } });
  });

  it('that ends in time is no alarm', async () => {
    const run = await begin();
    await bench.pass(5_000);
    await bench.run({ run, ml: 0.5 });
    await bench.pass(30_000, 5_000);
    expect(await bench.all()).toEqual([]);
  });

  it('that gives more than one and a half times its portion stops the pumps at once', async () => {
    const run = await begin({ ml: 0.4 });
    await bench.run({ run, ml: 0.75, endedMs: null });
    expect(await tooLong()).toEqual([]);
    await bench.run({ run, ml: 0.76, endedMs: null });
    expect(await tooLong()).toMatchObject([{ value: 0.76, limitValue: 0.75, unit: 'mL' }]);
  });

  it('that was ordered may give one and a half times what was ordered', async () => {
    const orderId = randomUUID();
    const { siteId, pumpId: deviceId } = bench;
    const order = { id: orderId, siteId, deviceId, head: 1, do: 'dose' as const, args: '{"ml":0.2}', createdAtMs: 0, expiresAtMs: null };
    const sent = { state: 'done' as const, attempts: 1, nextSendMs: 0, outcomeAtMs: 0, why: null, causeAlarmId: null };
    await bench.commit((tx) =>
      tx.run(query.insertInto('deviceOrder').values({ ...order, ...sent, actorKind: 'user', actorId: bench.userId })),
    );
    await bench.run({ ml: 0.3, cause: 'order', orderId });
    expect(await tooLong()).toEqual([]);
    await bench.run({ ml: 0.31, cause: 'order', orderId });
    expect(await tooLong()).toMatchObject([{ value: 0.31, limitValue: expect.closeTo(0.3, 9) }]);
  });

  it('of a head that nobody registered and no schedule knows may take a minute', async () => {
    await begin({ head: 5, headId: null, cause: 'button', scheduleVersion: null, dueMs: null });
    await bench.pass(100_000, 4_000);
    expect(await tooLong()).toEqual([]);
    await bench.pass(1_000);
    expect(await tooLong()).toMatchObject([{ target: `device:${bench.pumpId}/5`, limitValue: 100 }]);
    expect(bench.port.stops.at(-1)).toMatchObject({ headConcerned: { deviceId: bench.pumpId, head: 5 } });
  });

  it('is timed from the return of its pump', async () => {
    await bench.hear(true);
    await begin();
    await bench.hear(false);
    await bench.pass(60_000, 5_000);
    expect(await tooLong()).toEqual([]);
    await bench.hear(true);
    await bench.pass(10_000);
    expect(await tooLong()).toEqual([]);
    await bench.pass(1_000);
    expect(await tooLong()).toHaveLength(1);
  });

  it('is timed from the return of the server, and not before the pump is heard again', async () => {
    await bench.hear(true);
    await begin();
    await bench.alarms.close();
    bench.clock.advance(120_000);
    await bench.restart();
    await bench.pass(30_000, 5_000);
    expect(await tooLong()).toEqual([]);
    await bench.hear(true);
    await bench.pass(10_000);
    expect(await tooLong()).toEqual([]);
    await bench.pass(1_000);
    expect(await tooLong()).toHaveLength(1);
  });

  it('whose end comes right after a pump is heard again is no alarm', async () => {
    await bench.hear(true);
    const run = await begin();
    bench.clock.advance(40_000);
    await bench.restart();
    await bench.pass(25_000, 5_000);
    await bench.hear(true);
    await bench.run({ run, ml: 0.5 });
    await bench.pass(20_000, 5_000);
    expect(await tooLong()).toEqual([]);
  });

  it('is over when its head begins another one', async () => {
    await begin();
    await bench.pass(11_000);
    await bench.pass(3_000);
    await bench.run({ ml: 0.1 });
    expect(await tooLong()).toMatchObject([{ active: 0, acknowledged: 0, latched: 1 }]);
  });

  it('trips once, and again only by another run or by more volume', async () => {
    await begin();
    await bench.pass(11_000);
    const [alarm] = await tooLong();
    if (alarm === undefined) throw new Error('no alarm');
    const reset = await bench.alarms.reset(alarm.id, bench.userId, 'The motor was stuck');
    expect(reset).toMatchObject({ state: 'acknowledged', latched: false });
    const stops = bench.port.stops.length;
    await bench.pass(5_000);
    expect(bench.port.stops.length).toBe(stops);
    await begin();
    await bench.pass(11_000);
    expect(await tooLong()).toMatchObject([{ active: 1, acknowledged: 0, latched: 1 }]);
    expect(bench.port.stops.length).toBe(stops + 1);
  });
});
