import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { type Alarms, createAlarms } from '../../../server/alarms/create-alarms.ts';
import { recordRun } from '../../../server/doses/record-run.ts';
import type { RunPayload } from '../../../shared/mqtt/payloads.ts';
import { eventually } from '../../helpers/eventually.ts';
import { keeper, openPumpScene, type PumpScene } from '../../helpers/pump-scene.ts';

let scene: PumpScene;
let alarms: Alarms;
let headId: string;

const MINUTE_MS = 60_000;

beforeEach(async () => {
  scene = await openPumpScene({ startMs: Date.parse('2026-03-10T12:00:30Z') });
  headId = await scene.addHead({ head: 1 });
  await scene.schedules.put(
    scene.systemId,
    { heads: [{ headId, mlPerDay: 6, slotsUtcMin: Array.from({ length: 12 }, (_, index) => index * 120) }], confirmUnknownCeiling: false },
    keeper,
    'keeper',
  );
  scene.clock.advance(MINUTE_MS);
  alarms = createAlarms(scene.opened.core, scene.stops);
  await alarms.start();
});

afterEach(async () => {
  await alarms.close();
  await scene.close();
});

/** What ingest does with a run: row, ledger and mark in one unit. */
function receive(payload: Partial<RunPayload> & { run: string; ml: number }): Promise<unknown> {
  const nowMs = scene.clock.nowMs();
  const whole: RunPayload = { head: 1, phase: 'ended', atMs: nowMs, cause: 'button', ...payload };
  return scene.opened.core.writer.commit((tx) => recordRun(tx, scene.device, whole, nowMs, nowMs));
}

const alarmOf = async (code: string) =>
  scene.opened.core.reader.selectFrom('alarm').selectAll().where('code', '=', code).where('limitKind', '=', 'hard').executeTakeFirst();

describe('an overdose', () => {
  it('is answered by a stop order on its way to the pump in well under a second', async () => {
    const beganMs = performance.now();
    await receive({ run: 'a', ml: 9 });
    await eventually(() => scene.publisher.orders(scene.device.id).length > 0, 'a stop order');
    expect(performance.now() - beganMs).toBeLessThan(1000);
    expect(scene.publisher.orders(scene.device.id)[0]).toMatchObject({ head: 1, do: 'stop', expiresAtMs: null });
    await eventually(() => scene.publisher.schedules(scene.device.id).at(-1)?.heads[0]?.enabled === false, 'a disabling schedule');
  });

  it('leaves alarm, stop and order together, each naming the alarm', async () => {
    await receive({ run: 'a', ml: 1.7 });
    await alarms.settled();
    const hour = await alarmOf('volume-hour');
    const tooLong = await alarmOf('run-too-long');
    expect(hour).toMatchObject({ active: 1, latched: 1 });
    const [stop] = await scene.openStops();
    expect(stop).toMatchObject({ head: 1, cause: 'interlock', alarmId: tooLong?.id });
    const order = await scene.opened.core.reader.selectFrom('deviceOrder').selectAll().where('do', '=', 'stop').executeTakeFirstOrThrow();
    expect(order.createdAtMs).toBe(scene.clock.nowMs());
  });

  it('by a head that nobody registered stops that head too', async () => {
    await receive({ run: 'a', ml: 3, head: 4 });
    await alarms.settled();
    expect((await scene.openStops()).map((stop) => stop.head)).toEqual([1, 4]);
  });

  it('that is reported step by step trips while the motor still turns', async () => {
    await receive({ run: 'a', ml: 0, phase: 'begun' });
    for (const ml of [0.4, 0.8, 1.2]) {
      scene.clock.advance(1000);
      await receive({ run: 'a', ml, phase: 'running' });
    }
    await alarms.settled();
    expect(await alarmOf('run-too-long')).toMatchObject({ value: 1.2, unit: 'mL' });
    expect(await scene.openStops()).toHaveLength(1);
  });

  it('that is delivered twice over the wire is one alarm', async () => {
    await receive({ run: 'a', ml: 3 });
    await alarms.settled();
    const count = async () => (await scene.opened.core.reader.selectFrom('alarm').select('id').execute()).length;
    const before = await count();
    await receive({ run: 'a', ml: 3 });
    await alarms.settled();
    expect(await count()).toBe(before);
  });

  it('stops a carbon head too that comes into use while the alarm is latched', async () => {
    await receive({ run: 'a', ml: 3 });
    await alarms.settled();
    const second = await scene.addHead({ head: 2 });
    const heads = [{ headId: second, mlPerDay: 2, slots: 4 }];
    await scene.schedules.put(scene.systemId, { heads, confirmUnknownCeiling: false }, keeper, 'keeper');
    await alarms.settled();
    expect((await scene.openStops()).map((stop) => [stop.head, stop.cause])).toEqual([
      [1, 'interlock'],
      [2, 'interlock'],
    ]);
    await scene.schedules.publishDue();
    expect(
      scene.publisher
        .schedules(scene.device.id)
        .at(-1)
        ?.heads.map((head) => head.enabled),
    ).toEqual([false, false]);
  });

  it('asks for a reset before the pumps may resume, and trips again by the next dose while the window is over', async () => {
    await receive({ run: 'a', ml: 3 });
    await alarms.settled();
    await scene.state(scene.device.id, [{ head: 1, state: 'stopped' }]);
    const resume = () => scene.stops.resume(scene.systemId, undefined, keeper);
    await expect(resume()).rejects.toThrow(/latched/);
    for (const alarm of await alarms.list({ systemId: scene.systemId }, undefined, { limit: 50, after: null })) {
      if (alarm.latched === 1) await alarms.reset(alarm.id, keeper.id, 'A hand on the button');
    }
    scene.publisher.onOrder = (deviceId, order) => void scene.receipt(deviceId, { order: order.id, outcome: 'done' });
    expect((await resume()).orders).toMatchObject([{ outcome: 'done' }]);
    expect(await scene.openStops()).toEqual([]);
    scene.clock.advance(5 * MINUTE_MS);
    await receive({ run: 'b', ml: 0.1 });
    await alarms.settled();
    expect(await alarmOf('volume-hour')).toMatchObject({ latched: 1, acknowledged: 0 });
    expect(await scene.openStops()).toHaveLength(1);
  });
});

describe('a scheduled portion on time', () => {
  it('is no alarm, in whatever order its steps come', async () => {
    scene.clock.set(Date.parse('2026-03-10T14:00:05Z'));
    const dueMs = Date.parse('2026-03-10T14:00:00Z');
    const scheduled = { run: 'a', cause: 'schedule' as const, dueMs };
    await receive({ ...scheduled, ml: 0.5, phase: 'ended', begunMs: scene.clock.nowMs() - 500 });
    await receive({ ...scheduled, ml: 0, phase: 'begun', atMs: scene.clock.nowMs() - 500 });
    await alarms.settled();
    await alarms.tick();
    expect(await scene.opened.core.reader.selectFrom('alarm').selectAll().execute()).toEqual([]);
  });
});
