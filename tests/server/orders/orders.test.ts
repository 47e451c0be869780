import { uuidv7 } from 'uuidv7';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { insertOrder, type NewOrder } from '../../../server/orders/insert-order.ts';
import { keeper, openPumpScene, type PumpScene } from '../../helpers/pump-scene.ts';

let scene: PumpScene;

beforeEach(async () => {
  scene = await openPumpScene();
});

afterEach(() => scene.close());

const add = (order: Partial<NewOrder>) =>
  scene.opened.core.writer.commit((tx) => {
    const common = { siteId: scene.siteId, deviceId: scene.device.id, head: 1, causeAlarmId: null, actor: keeper };
    const id = insertOrder(tx, { ...common, do: 'stop', nowMs: scene.clock.nowMs(), ...order });
    scene.orders.request();
    return id;
  });

const sent = () => scene.publisher.orders(scene.device.id);

describe('the outbox', () => {
  it('sends what a commit put into it without being asked', async () => {
    const arrived = new Promise((resolve) => (scene.publisher.onOrder = (_, order) => resolve(order)));
    const id = await add({ do: 'dose', args: { ml: 0.5 } });
    expect(await arrived).toEqual({ id, expiresAtMs: scene.clock.nowMs() + 60_000, head: 1, do: 'dose', ml: 0.5 });
  });

  it('sends what starts a motor once, however long the pump is silent', async () => {
    const id = await add({ do: 'dose', args: { ml: 0.5 } });
    for (let second = 0; second < 60; second += 5) {
      await scene.orders.dispatch();
      scene.clock.advance(5_000);
    }
    expect(sent()).toHaveLength(1);
    scene.clock.advance(10_001);
    await scene.orders.dispatch();
    expect(await scene.order(id)).toMatchObject({ state: 'expired' });
  });

  it('sends what starts a motor once over a restart of the server', async () => {
    await add({ do: 'prime', args: { seconds: 3 } });
    await scene.orders.dispatch();
    await scene.restart();
    await scene.orders.dispatch();
    expect(sent()).toHaveLength(1);
  });

  it('goes on sending a stop when the clock of the server was set back', async () => {
    await add({});
    await scene.orders.dispatch();
    scene.clock.advance(-3_600_000);
    await scene.orders.dispatch();
    expect(sent()).toHaveLength(2);
  });

  it('does not keep what starts a motor for a pump that is away', async () => {
    scene.publisher.connected.clear();
    const id = await add({ do: 'dose', args: { ml: 0.5 } });
    await scene.orders.dispatch();
    scene.publisher.connected.add(scene.device.id);
    scene.orders.deviceConnected(scene.device.id);
    await scene.orders.dispatch();
    expect(sent()).toEqual([]);
    expect(await scene.order(id)).toMatchObject({ state: 'refused', why: 'offline' });
  });

  it('sends the stops that wait as soon as their pump is back, whenever they were sent last', async () => {
    await add({});
    await scene.orders.dispatch();
    scene.clock.advance(1_000);
    scene.orders.deviceConnected(scene.device.id);
    await scene.orders.dispatch();
    expect(sent()).toHaveLength(2);
  });
});

describe('a receipt', () => {
  it('settles its order by the time of the pump', async () => {
    const id = await add({});
    await scene.receipt(scene.device.id, { order: id, outcome: 'done', atMs: scene.clock.nowMs() - 700 });
    expect(await scene.order(id)).toMatchObject({ state: 'done', outcomeAtMs: scene.clock.nowMs() - 700 });
  });

  it('of a pump whose clock is unset counts by its arrival', async () => {
    const id = await add({});
    await scene.receipt(scene.device.id, { order: id, outcome: 'done', atMs: 12_345 });
    expect(await scene.order(id)).toMatchObject({ state: 'done', outcomeAtMs: scene.clock.nowMs() });
  });

  it('that repeats, or comes late for an old order, changes nothing', async () => {
    const id = await add({});
    await scene.receipt(scene.device.id, { order: id, outcome: 'refused', why: 'busy' });
    scene.clock.advance(1_000);
    await scene.receipt(scene.device.id, { order: id, outcome: 'done' });
    expect(await scene.order(id)).toMatchObject({ state: 'refused', why: 'busy', outcomeAtMs: scene.clock.nowMs() - 1_000 });
  });

  it.each([1e300, 9e15])('takes its arrival for a time that is no date: %d', async (atMs) => {
    await scene.addHead({ head: 1 });
    const id = await add({});
    await scene.receipt(scene.device.id, { order: id, outcome: 'done', atMs });
    expect(await scene.orders.list(scene.systemId)).toMatchObject([{ id, outcome: 'done', at: '2026-03-01T12:00:00.000Z' }]);
  });

  it('for the order of another pump, or for none, changes nothing', async () => {
    const id = await add({});
    const other = await scene.addDevice();
    await scene.receipt(other.id, { order: id, outcome: 'done' });
    await scene.receipt(scene.device.id, { order: uuidv7(), outcome: 'done' });
    expect(await scene.order(id)).toMatchObject({ state: 'waiting' });
  });
});

describe('the outcomes', () => {
  it('are told in the order asked', async () => {
    const ids = [await add({ head: 1 }), await add({ head: 2 }), await add({ head: 3 })];
    for (const order of ids) await scene.receipt(scene.device.id, { order, outcome: 'done' });
    const asked = ids.toReversed();
    expect((await scene.orders.outcomes(asked)).map((one) => one.id)).toEqual(asked);
  });

  it('of a system are listed newest first with what was ordered', async () => {
    await scene.addHead({ head: 1 });
    const first = await add({});
    scene.clock.advance(1_000);
    const second = await add({ do: 'dose', args: { ml: 1 } });
    await scene.receipt(scene.device.id, { order: first, outcome: 'done' });
    scene.publisher.connected.clear();
    expect(await scene.orders.list(scene.systemId)).toMatchObject([
      { id: second, do: 'dose', outcome: 'waiting', createdAt: '2026-03-01T12:00:01.000Z' },
      { id: first, do: 'stop', outcome: 'done', createdAt: '2026-03-01T12:00:00.000Z' },
    ]);
    expect(await scene.orders.list(uuidv7())).toEqual([]);
  });
});
