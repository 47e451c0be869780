import { uuidv7 } from 'uuidv7';
import { query } from '../../server/db/open.ts';
import type { NewRow, Row } from '../../server/db/schema.ts';
import type { DevicePublisher } from '../../server/orders/device-publisher.ts';
import { createOrders, type Orders } from '../../server/orders/create-orders.ts';
import { createSchedules, type Schedules } from '../../server/schedules/create-schedules.ts';
import { createStops, type Stops } from '../../server/stops/create-stops.ts';
import { orderPayloadSchema, type OrderPayload, schedulePayloadSchema, type SchedulePayload } from '../../shared/mqtt/payloads.ts';
import { manualClock, type ManualClock, openTestCore, type TestCore } from './core.ts';

export const owner = { kind: 'user', id: uuidv7() } as const;
export const keeper = { kind: 'user', id: uuidv7() } as const;

export interface Published {
  topic: string;
  payload: string;
  retain: boolean;
}

/** Stands in for the broker: says who is connected, keeps what was published, and tells those who wait for it. */
export interface FakePublisher extends DevicePublisher {
  connected: Set<string>;
  published: Published[];
  /** Called with each order that reaches a pump. */
  onOrder: (deviceId: string, order: OrderPayload) => void;
  /** Fails the next publications with this, until set back to null. */
  failure: Error | null;
  orders(deviceId: string): OrderPayload[];
  schedules(deviceId: string): SchedulePayload[];
}

export function fakePublisher(): FakePublisher {
  const payloads = (deviceId: string, word: string) =>
    fake.published.filter((one) => one.topic === `steadfall/${deviceId}/${word}`).map((one): unknown => JSON.parse(one.payload));
  const fake: FakePublisher = {
    connected: new Set(),
    published: [],
    onOrder: () => undefined,
    failure: null,
    isConnected: (deviceId) => fake.connected.has(deviceId),
    publish(topic, payload, { retain }) {
      if (fake.failure !== null) return Promise.reject(fake.failure);
      fake.published.push({ topic, payload, retain });
      const [, deviceId, word] = topic.split('/');
      if (word === 'order' && deviceId !== undefined) fake.onOrder(deviceId, orderPayloadSchema.parse(JSON.parse(payload)));
      return Promise.resolve();
    },
    orders: (deviceId) => payloads(deviceId, 'order').map((one) => orderPayloadSchema.parse(one)),
    schedules: (deviceId) => payloads(deviceId, 'schedule').map((one) => schedulePayloadSchema.parse(one)),
  };
  return fake;
}

export interface HeadSpec {
  head: number;
  kind?: 'carbon' | 'other';
  smallestMl?: number;
  productId?: string | null;
}

/** One site, one system of 420 L and one pump with its heads, over a real database, with the services that control it. */
export interface PumpScene {
  opened: TestCore;
  clock: ManualClock;
  publisher: FakePublisher;
  schedules: Schedules;
  orders: Orders;
  stops: Stops;
  siteId: string;
  systemId: string;
  /** 2 mL per 100 L and day: 8.4 mL a day here. */
  productId: string;
  device: { id: string; siteId: string; systemId: string };
  addDevice(): Promise<{ id: string; siteId: string; systemId: string }>;
  addHead(spec: HeadSpec, deviceId?: string): Promise<string>;
  insert<Table extends keyof Inserts>(table: Table, row: Inserts[Table]): Promise<void>;
  receipt(
    deviceId: string,
    receipt: { order: string; outcome: 'done' | 'refused' | 'expired'; why?: string; atMs?: number },
  ): Promise<void>;
  state(deviceId: string, heads: { head: number; state: 'idle' | 'dosing' | 'stopped' }[]): Promise<void>;
  order(id: string): Promise<Row<'deviceOrder'>>;
  openStops(): Promise<Row<'headStop'>[]>;
  /** Builds the services anew over the same rows, as a restart of the server does. */
  restart(): Promise<void>;
  close(): Promise<void>;
}

interface Inserts {
  alarm: NewRow<'alarm'>;
  run: NewRow<'run'>;
  doseLedger: NewRow<'doseLedger'>;
  handDose: NewRow<'handDose'>;
  deviceState: NewRow<'deviceState'>;
  product: NewRow<'product'>;
  productRevision: NewRow<'productRevision'>;
  scheduleVersion: NewRow<'scheduleVersion'>;
  headStop: NewRow<'headStop'>;
}

export async function openPumpScene(options: { timeZone?: string; startMs?: number } = {}): Promise<PumpScene> {
  const clock = manualClock(options.startMs);
  const opened = await openTestCore(clock);
  const { core } = opened;
  const publisher = fakePublisher();
  const nowMs = clock.nowMs();
  const [siteId, systemId, productId] = [uuidv7(), uuidv7(), uuidv7()];

  const insert: PumpScene['insert'] = async (table, row) => {
    await core.writer.commit((tx) => tx.run(query.insertInto(table as keyof Inserts).values(row)));
  };

  async function addDevice() {
    const device = { id: uuidv7(), siteId, systemId };
    const row = { ...device, name: 'Pump', kind: 'pump' as const, secretHash: 'x', credentialVersion: 1, createdAtMs: nowMs };
    await core.writer.commit((tx) => tx.run(query.insertInto('device').values(row)));
    publisher.connected.add(device.id);
    return device;
  }

  await core.writer.commit((tx) => {
    tx.run(query.insertInto('site').values({ id: siteId, name: 'Site', timeZone: options.timeZone ?? 'UTC', createdAtMs: nowMs }));
    const volumes = { displayLitres: 400, sumpLitres: 80, displacementLitres: 60 };
    tx.run(query.insertInto('system').values({ id: systemId, siteId, name: 'System', ...volumes, createdAtMs: nowMs }));
    tx.run(query.insertInto('product').values({ id: productId, siteId, name: 'Carbon', form: 'liquid', createdAtMs: nowMs }));
    const label = { labelMl: 2, labelMaxMl: null, labelPerLitres: 100, labelPerDays: 1 };
    const strength = { composition: '[]', oxygenDemandMgPerMl: 657.8, carbonMgPerMl: 164.6 };
    tx.run(
      query.insertInto('productRevision').values({ id: uuidv7(), productId, siteId, ...strength, ...label, fromMs: 0, actorId: owner.id }),
    );
  });
  const device = await addDevice();

  function services() {
    const schedules = createSchedules(core, publisher);
    const orders = createOrders(core, publisher);
    return { schedules, orders, stops: createStops(core, orders, schedules) };
  }

  async function closeServices() {
    scene.stops.close();
    await scene.orders.close();
    await scene.schedules.close();
  }

  const scene: PumpScene = {
    opened,
    clock,
    publisher,
    ...services(),
    siteId,
    systemId,
    productId,
    device,
    addDevice,
    insert,
    async addHead({ head, kind = 'carbon', smallestMl = 0.1, productId: given }, deviceId = device.id) {
      const headId = uuidv7();
      const assignment = { kind, productId: given === undefined ? productId : given, reservoirId: null, mlPerSecond: 1.1, smallestMl };
      await core.writer.commit((tx) => {
        tx.run(query.insertInto('head').values({ id: headId, siteId, deviceId, head, createdAtMs: nowMs }));
        const dates = { fromMs: nowMs - 30 * 86_400_000, toMs: null };
        tx.run(
          query.insertInto('headAssignment').values({ id: uuidv7(), siteId, headId, systemId, ...assignment, ...dates, actorId: owner.id }),
        );
      });
      return headId;
    },
    receipt: (deviceId, { order, outcome, why, atMs = clock.nowMs() }) =>
      core.writer.commit((tx) =>
        scene.orders.hooks.onReceipt(tx, { ...device, id: deviceId }, { order, outcome, why, atMs }, clock.nowMs()),
      ),
    state: (deviceId, heads) =>
      core.writer.commit((tx) => scene.orders.hooks.onState(tx, { ...device, id: deviceId }, { online: true, heads }, clock.nowMs())),
    order: (id) => core.reader.selectFrom('deviceOrder').selectAll().where('id', '=', id).executeTakeFirstOrThrow(),
    openStops: () => core.reader.selectFrom('headStop').selectAll().where('resumedAtMs', 'is', null).orderBy('head').execute(),
    async restart() {
      await closeServices();
      Object.assign(scene, services());
    },
    async close() {
      await closeServices();
      await opened.close();
    },
  };
  return scene;
}

/** The pump answers every order at once, as a pump that works does. */
export function answerAll(scene: PumpScene, outcome: 'done' | 'refused' = 'done', why?: string): void {
  scene.publisher.onOrder = (deviceId, order) => void scene.receipt(deviceId, { order: order.id, outcome, why });
}
