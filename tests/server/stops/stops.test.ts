import { uuidv7 } from 'uuidv7';
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { BadInputError } from '../../../server/errors.ts';
import { answerAll, keeper, openPumpScene, owner, type PumpScene } from '../../helpers/pump-scene.ts';

let scene: PumpScene;
let headId: string;

const HOUR_MS = 3_600_000;
const setDose = (mlPerDay: number) =>
  scene.schedules.put(scene.systemId, { heads: [{ headId, mlPerDay, slots: 4 }], confirmUnknownCeiling: false }, keeper, 'keeper');
const stop = (headIds?: string[]) => scene.stops.stop(scene.systemId, headIds, keeper);
const resume = (headIds?: string[]) => scene.stops.resume(scene.systemId, headIds, keeper);
const sent = () => scene.publisher.orders(scene.device.id);
const enabledNow = async () => {
  await scene.schedules.publishDue();
  return scene.publisher
    .schedules(scene.device.id)
    .at(-1)
    ?.heads.map((head) => [head.head, head.enabled]);
};

/** Lets everything that is ready happen, without any time passing. */
const settle = async () => {
  for (let turn = 0; turn < 20; turn += 1) await new Promise((resolve) => setImmediate(resolve));
};

/** Has an interlock stop the system in a unit of its own, as an alarm does. */
const interlock = (alarmId: string, headConcerned: { deviceId: string; head: number } | null = null) =>
  scene.opened.core.writer.commit((tx) => {
    const { siteId, systemId, clock } = scene;
    return scene.stops.stopHeads(tx, { siteId, systemId, cause: 'interlock', alarmId, headConcerned, nowMs: clock.nowMs() });
  });

async function latchedAlarm(): Promise<string> {
  const id = uuidv7();
  const { siteId, systemId } = scene;
  const flags = { active: 0, acknowledged: 1, latched: 1, interlock: 1, shelvedUntilMs: null, returnedAtMs: null, closedAtMs: null };
  const words = { code: 'volume-hour', target: 'system', limitKind: 'hard', priority: 'urgent', unit: 'mL', evidence: '{}' } as const;
  const rest = { tripKey: 'system', tripSeq: 1, value: 3, limitValue: 2, takenBy: null, arriveAtMs: null, raisedAtMs: scene.clock.nowMs() };
  await scene.insert('alarm', { id, siteId, systemId, ...words, ...flags, ...rest });
  return id;
}

beforeEach(async () => {
  scene = await openPumpScene();
  headId = await scene.addHead({ head: 1 });
  await scene.addHead({ head: 3, kind: 'other', productId: null });
  await setDose(4);
});

afterEach(() => scene.close());

describe('a stop', () => {
  it('is answered as soon as the pump has done it, and leaves the head disabled in a new schedule', async () => {
    answerAll(scene);
    const answer = await stop();
    expect(answer.orders).toMatchObject([{ deviceId: scene.device.id, head: 1, outcome: 'done', why: null }]);
    expect(sent()).toEqual([{ id: answer.orders[0]?.id, expiresAtMs: null, head: 1, do: 'stop' }]);
    expect(await enabledNow()).toEqual([[1, false]]);
    expect(await scene.openStops()).toMatchObject([{ head: 1, cause: 'person', actorId: keeper.id }]);
  });

  it('commits the latch, the disabling schedule and the order together, or none of them', async () => {
    const { core } = scene.opened;
    const unit = core.writer.commit((tx) => {
      const { siteId, systemId, clock } = scene;
      scene.stops.stopHeads(tx, { siteId, systemId, cause: 'interlock', alarmId: uuidv7(), headConcerned: null, nowMs: clock.nowMs() });
      throw new Error('the rest of the unit failed');
    });
    await expect(unit).rejects.toThrow('the rest');
    await scene.orders.dispatch();
    expect(await scene.openStops()).toEqual([]);
    expect(sent()).toEqual([]);
    expect(await enabledNow()).toEqual([[1, true]]);
  });

  it('says within no time that a pump is away, and stops it when it is back', async () => {
    scene.publisher.connected.clear();
    const answer = await stop();
    expect(answer.orders).toMatchObject([{ head: 1, outcome: 'waiting' }]);
    expect(sent()).toEqual([]);
    scene.clock.advance(3 * 24 * HOUR_MS);
    scene.publisher.connected.add(scene.device.id);
    scene.orders.deviceConnected(scene.device.id);
    await scene.orders.dispatch();
    expect(sent()).toMatchObject([{ id: answer.orders[0]?.id, do: 'stop', expiresAtMs: null }]);
    expect(await enabledNow()).toEqual([[1, false]]);
  });

  it('waits 5 s for a silent pump and no longer', async () => {
    vi.useFakeTimers({ toFake: ['setTimeout', 'clearTimeout'] });
    try {
      let isAnswered = false;
      const answer = stop().finally(() => (isAnswered = true));
      await settle();
      vi.advanceTimersByTime(4_999);
      await settle();
      expect(isAnswered).toBe(false);
      vi.advanceTimersByTime(1);
      expect((await answer).orders).toMatchObject([{ outcome: 'no-answer', at: null }]);
    } finally {
      vi.useRealTimers();
    }
  });

  it('is sent again every 5 s until a receipt comes', async () => {
    const [orderId] = await interlock(uuidv7());
    await scene.orders.dispatch();
    await scene.orders.dispatch();
    expect(sent()).toHaveLength(1);
    scene.clock.advance(4_999);
    await scene.orders.dispatch();
    expect(sent()).toHaveLength(1);
    scene.clock.advance(1);
    await scene.orders.dispatch();
    expect(sent()).toHaveLength(2);
    await scene.receipt(scene.device.id, { order: orderId ?? '', outcome: 'done' });
    scene.clock.advance(60_000);
    await scene.orders.dispatch();
    expect(sent().map((order) => order.id)).toEqual([orderId, orderId]);
  });

  it('is answered by a pump that says its head is stopped', async () => {
    scene.publisher.onOrder = (deviceId) => void scene.state(deviceId, [{ head: 1, state: 'stopped' }]);
    expect((await stop()).orders).toMatchObject([{ outcome: 'done' }]);
  });

  it('tells why a pump refuses it, and goes on telling the pump when its head says anything but stopped', async () => {
    answerAll(scene, 'refused', 'valve stuck');
    expect((await stop()).orders).toMatchObject([{ outcome: 'refused', why: 'valve stuck' }]);
    await scene.state(scene.device.id, [{ head: 1, state: 'dosing' }]);
    await scene.orders.dispatch();
    expect(sent()).toHaveLength(2);
    expect(new Set(sent().map((order) => order.id)).size).toBe(2);
  });

  it('tells a pump again that forgot its stop in a restart', async () => {
    answerAll(scene);
    await stop();
    await scene.state(scene.device.id, [{ head: 1, state: 'idle' }]);
    await scene.orders.dispatch();
    expect(sent().map((order) => order.do)).toEqual(['stop', 'stop']);
  });

  it('pressed by two people at once is one order with one answer for both', async () => {
    const ids: string[] = [];
    scene.publisher.onOrder = (_, order) => {
      ids.push(order.id);
      if (ids.length === 1) void scene.receipt(scene.device.id, { order: order.id, outcome: 'done' });
    };
    const [one, two] = await Promise.all([stop(), scene.stops.stop(scene.systemId, undefined, owner)]);
    expect(one.orders).toMatchObject([{ outcome: 'done' }]);
    expect(two.orders).toEqual(one.orders);
    expect(await scene.openStops()).toHaveLength(1);
  });

  it('of what is stopped already sends the order again and answers properly', async () => {
    answerAll(scene);
    await stop();
    scene.clock.advance(1_000);
    const again = await stop();
    expect(again.orders).toMatchObject([{ outcome: 'done' }]);
    expect(sent()).toHaveLength(2);
    expect(await scene.openStops()).toHaveLength(1);
  });

  it('takes the heads that a person names, also those without carbon, and no others', async () => {
    answerAll(scene);
    const other = await scene.addHead({ head: 4, kind: 'other', productId: null });
    expect((await stop([other])).orders).toMatchObject([{ head: 4 }]);
    await expect(stop([uuidv7()])).rejects.toThrow(BadInputError);
  });

  it('reaches an unregistered head that is dosing', async () => {
    answerAll(scene);
    const heads = JSON.stringify([
      { head: 1, state: 'idle', odometerMl: null, odometerEpoch: null },
      { head: 7, state: 'dosing', odometerMl: null, odometerEpoch: null },
      { head: 8, state: 'idle', odometerMl: null, odometerEpoch: null },
    ]);
    const times = { heardAtMs: 0, changedAtMs: 0, scheduleVersion: null, clockOffsetMs: null, clockUnset: 0 };
    await scene.insert('deviceState', { deviceId: scene.device.id, online: 1, ...times, heads });
    expect((await stop()).orders.map((order) => order.head)).toEqual([1, 7]);
  });

  it('by an interlock takes every head that nobody registered, and the head concerned', async () => {
    const heads = JSON.stringify([{ head: 8, state: 'idle', odometerMl: null, odometerEpoch: null }]);
    const times = { heardAtMs: 0, changedAtMs: 0, scheduleVersion: null, clockOffsetMs: null, clockUnset: 0 };
    await scene.insert('deviceState', { deviceId: scene.device.id, online: 1, ...times, heads });
    const alarmId = uuidv7();
    await interlock(alarmId, { deviceId: scene.device.id, head: 3 });
    expect((await scene.openStops()).map((row) => [row.head, row.cause, row.alarmId])).toEqual([
      [1, 'interlock', alarmId],
      [3, 'interlock', alarmId],
      [8, 'interlock', alarmId],
    ]);
  });

  it('by an interlock takes over from a person', async () => {
    scene.publisher.connected.clear();
    await stop();
    const alarmId = uuidv7();
    await interlock(alarmId);
    expect(await scene.openStops()).toMatchObject([{ cause: 'interlock', alarmId }]);
  });

  it('survives a restart of the server between the commit and the sending', async () => {
    scene.publisher.connected.clear();
    scene.publisher.failure = new Error('the server is about to die');
    const { orders } = await stop();
    await scene.restart();
    scene.publisher.failure = null;
    scene.publisher.connected.add(scene.device.id);
    answerAll(scene);
    await scene.orders.dispatch();
    expect(await scene.orders.outcomes(orders.map((order) => order.id))).toMatchObject([{ outcome: 'done' }]);
    expect(await enabledNow()).toEqual([[1, false]]);
  });

  it('does not wait for one pump to be taken by another', async () => {
    const second = await scene.addDevice();
    await scene.addHead({ head: 1 }, second.id);
    const publish = scene.publisher.publish.bind(scene.publisher);
    await scene.schedules.publishDue();
    scene.publisher.publish = (topic, payload, options) =>
      topic.includes(scene.device.id) ? new Promise(() => undefined) : publish(topic, payload, options);
    await interlock(uuidv7());
    await scene.orders.dispatch();
    expect(scene.publisher.orders(second.id)).toHaveLength(1);
    expect(sent()).toEqual([]);
    scene.publisher.publish = publish;
  });
});

describe('the proof of a stop', () => {
  const confirmed = async () => (await scene.openStops()).map((row) => row.confirmedAtMs);

  it('is the receipt of the pump, and its time of arrival stays', async () => {
    const [orderId] = await interlock(uuidv7());
    expect(await confirmed()).toEqual([null]);
    scene.clock.advance(2_000);
    const provedMs = scene.clock.nowMs();
    await scene.receipt(scene.device.id, { order: orderId ?? '', outcome: 'done', atMs: provedMs - 60_000 });
    scene.clock.advance(5_000);
    await scene.state(scene.device.id, [{ head: 1, state: 'stopped' }]);
    expect(await confirmed()).toEqual([provedMs]);
    const changes = await scene.opened.core.reader.selectFrom('change').select('payload').where('atMs', '=', provedMs).execute();
    expect(changes).toEqual([{ payload: '{"reason":"stop"}' }]);
  });

  it('is a report that says stopped, also when somebody presses again while the pump is away', async () => {
    await interlock(uuidv7());
    await scene.state(scene.device.id, [{ head: 1, state: 'stopped' }]);
    scene.publisher.connected.clear();
    await stop();
    expect(await confirmed()).toEqual([scene.clock.nowMs()]);
  });

  it('is not a refusal, nor a report of another head', async () => {
    answerAll(scene, 'refused');
    await stop();
    await scene.state(scene.device.id, [{ head: 2, state: 'stopped' }]);
    expect(await confirmed()).toEqual([null]);
  });

  it('is gone when the pump says otherwise, until it has stopped again', async () => {
    answerAll(scene);
    await stop();
    scene.publisher.onOrder = () => undefined;
    await scene.state(scene.device.id, [{ head: 1, state: 'dosing' }]);
    expect(await confirmed()).toEqual([null]);
    scene.clock.advance(1_000);
    await scene.state(scene.device.id, [{ head: 1, state: 'stopped' }]);
    expect(await confirmed()).toEqual([scene.clock.nowMs()]);
  });

  it('is gone when a resume that was taken back comes through late', async () => {
    answerAll(scene);
    await stop();
    let resumeId = '';
    scene.publisher.onOrder = (_, order) => (resumeId = order.do === 'resume' ? order.id : resumeId);
    const resuming = resume();
    await settle();
    const [stopId] = await interlock(uuidv7());
    await resuming;
    await scene.receipt(scene.device.id, { order: resumeId, outcome: 'done' });
    expect(await confirmed()).toEqual([null]);
    await scene.receipt(scene.device.id, { order: stopId ?? '', outcome: 'done' });
    expect(await confirmed()).toEqual([scene.clock.nowMs()]);
  });
});

describe('resuming', () => {
  beforeEach(async () => {
    answerAll(scene);
    await stop();
  });

  it('lets the enabling schedule follow the receipt of the pump', async () => {
    const seen: (readonly boolean[])[] = [];
    scene.publisher.onOrder = (deviceId, order) => {
      seen.push(
        scene.publisher
          .schedules(deviceId)
          .at(-1)
          ?.heads.map((head) => head.enabled) ?? [],
      );
      void scene.receipt(deviceId, { order: order.id, outcome: 'done' });
    };
    await scene.schedules.publishDue();
    const answer = await resume();
    expect(answer.orders).toMatchObject([{ head: 1, outcome: 'done' }]);
    expect(seen).toEqual([[false]]);
    expect(await enabledNow()).toEqual([[1, true]]);
    expect(await scene.openStops()).toEqual([]);
    expect(sent().at(-1)).toMatchObject({ do: 'resume', expiresAtMs: scene.clock.nowMs() + 60_000 });
  });

  it('leaves the head stopped when the pump refuses, and says why', async () => {
    answerAll(scene, 'refused', 'clock');
    expect((await resume()).orders).toMatchObject([{ outcome: 'refused', why: 'clock' }]);
    expect(await scene.openStops()).toHaveLength(1);
    expect(await enabledNow()).toEqual([[1, false]]);
  });

  it('leaves the head stopped when the pump is silent', async () => {
    scene.publisher.onOrder = () => undefined;
    vi.useFakeTimers({ toFake: ['setTimeout', 'clearTimeout'] });
    try {
      const answer = resume();
      await settle();
      vi.advanceTimersByTime(5_000);
      expect((await answer).orders).toMatchObject([{ outcome: 'no-answer' }]);
    } finally {
      vi.useRealTimers();
    }
    expect(await scene.openStops()).toHaveLength(1);
    expect(await enabledNow()).toEqual([[1, false]]);
  });

  it('is refused while an alarm of the system is latched', async () => {
    await latchedAlarm();
    await expect(resume()).rejects.toMatchObject({ rule: 'alarm-latched' });
    expect(sent().map((order) => order.do)).toEqual(['stop']);
  });

  it('is refused for a pump that is away', async () => {
    scene.publisher.connected.clear();
    await expect(resume()).rejects.toMatchObject({ rule: 'pump-offline' });
    expect(await scene.opened.core.reader.selectFrom('deviceOrder').select('do').execute()).toEqual([{ do: 'stop' }]);
  });

  it('is refused when nothing is stopped', async () => {
    await resume();
    await expect(resume()).rejects.toMatchObject({ rule: 'not-stopped' });
  });

  it('works up to 48 h after the stop, and later only with a dose set since', async () => {
    scene.clock.advance(48 * HOUR_MS);
    await resume();
    await stop();
    scene.clock.advance(48 * HOUR_MS + 1);
    await expect(resume()).rejects.toMatchObject({ rule: 'off-too-long' });
    await setDose(2);
    expect((await resume()).orders).toMatchObject([{ outcome: 'done' }]);
    expect(await enabledNow()).toEqual([[1, true]]);
  });

  it('is not ordered over a stop that the pump has not answered', async () => {
    scene.publisher.onOrder = () => undefined;
    await interlock(uuidv7());
    await expect(resume()).rejects.toMatchObject({ rule: 'stop-unanswered' });
  });

  it('is taken back by a stop that comes while the pump is asked', async () => {
    let resumeId = '';
    scene.publisher.onOrder = (deviceId, order) => {
      if (order.do === 'resume') resumeId = order.id;
      else void scene.receipt(deviceId, { order: order.id, outcome: 'done' });
    };
    const waiting = resume();
    await settle();
    expect(resumeId).not.toBe('');
    expect((await stop()).orders).toMatchObject([{ outcome: 'done' }]);
    expect((await waiting).orders).toMatchObject([{ id: resumeId, outcome: 'expired', why: 'stopped' }]);
    expect(await scene.openStops()).toHaveLength(1);
  });

  it('that comes through late, after a stop took it back, is followed by a stop', async () => {
    let resumeId = '';
    scene.publisher.onOrder = (deviceId, order) => {
      if (order.do === 'resume') resumeId = order.id;
      else void scene.receipt(deviceId, { order: order.id, outcome: 'done' });
    };
    const waiting = resume();
    await settle();
    await stop();
    await waiting;
    const before = sent().length;
    await scene.receipt(scene.device.id, { order: resumeId, outcome: 'done' });
    await scene.orders.dispatch();
    expect(sent().slice(before)).toMatchObject([{ head: 1, do: 'stop' }]);
    expect(await scene.openStops()).toHaveLength(1);
    expect(await enabledNow()).toEqual([[1, false]]);
  });

  it('of a pump that resumed after the order had expired is followed by a stop', async () => {
    scene.publisher.onOrder = () => undefined;
    vi.useFakeTimers({ toFake: ['setTimeout', 'clearTimeout'] });
    const waiting = resume();
    await settle();
    vi.advanceTimersByTime(5_000);
    const [order] = (await waiting).orders;
    vi.useRealTimers();
    scene.clock.advance(71_000);
    await scene.orders.dispatch();
    expect(await scene.order(order?.id ?? '')).toMatchObject({ state: 'expired' });
    const before = sent().length;
    await scene.receipt(scene.device.id, { order: order?.id ?? '', outcome: 'done' });
    await scene.orders.dispatch();
    expect(sent().slice(before)).toMatchObject([{ do: 'stop' }]);
    expect(await scene.openStops()).toHaveLength(1);
  });
});
