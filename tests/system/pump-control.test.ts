import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { eventually } from '../helpers/eventually.ts';
import { scriptedPump, type ScriptedPump } from '../helpers/scripted-pump.ts';
import { apiOf, type Api, startTestServer, type TestServer } from '../helpers/server.ts';

let folder: string;
let server: TestServer;
let pump: ScriptedPump;
let systemId: string;
let siteId: string;
let deviceId: string;
let headId: string;
let token: string;
let api: Api;

beforeEach(async () => {
  folder = mkdtempSync(path.join(tmpdir(), 'steadfall-control-'));
  server = await startTestServer({ folder });
  const household = await server.household();
  ({ systemId, siteId } = household);
  ({ token, api } = household.owner);
  const made = await api('createDevice', { params: { systemId }, body: { name: 'Pump', kind: 'pump' } });
  deviceId = made.device.id;
  const label = { ml: 2, maxMl: null, perLitres: 100, perDays: 1 };
  const product = await api('createProduct', { params: { siteId }, body: { name: 'Carbon', form: 'liquid', composition: [], label } });
  const use = { kind: 'carbon' as const, productId: product.id, mlPerSecond: 1.1, smallestMl: 0.1 };
  headId = (await api('createHead', { params: { systemId }, body: { deviceId, head: 1, ...use } })).id;
  pump = scriptedPump({ username: made.credentials.username, password: made.credentials.password ?? '' });
  await pump.connect(server.mqttPort);
  await api('putSchedule', { params: { systemId }, body: { heads: [{ headId, mlPerDay: 2.1, slots: 12 }] } });
});

afterEach(async () => {
  await pump.drop();
  await server.close();
  rmSync(folder, { recursive: true, force: true });
});

const stop = (by: Api = api) => by('stop', { params: { systemId } });
const resume = () => api('resume', { params: { systemId } });
const head = async () => (await api('listHeads', { params: { systemId } })).items[0];
const newestOrder = async () => (await api('listOrders', { params: { systemId } })).items[0];
const lastEnabled = () => pump.schedules.at(-1)?.heads.map((one) => one.enabled);

/** Another start on the same data; the port for devices may be another one. */
async function restartServer(): Promise<void> {
  await server.close();
  server = await startTestServer({ folder });
  api = apiOf(server.url, token);
}

describe('a pump under control', () => {
  it('proves the schedule that it runs, stops, and doses again only once it has resumed', async () => {
    await eventually(async () => {
      const [device] = (await api('listDevices', { params: { systemId } })).items;
      return device?.publishedScheduleVersion !== null && device?.publishedScheduleVersion === device?.state?.scheduleVersion;
    }, 'the pump proves the schedule published for it');

    const sitter = await server.member(siteId, 'sitter');
    expect((await stop(sitter.api)).orders).toMatchObject([{ deviceId, head: 1, outcome: 'done' }]);
    await eventually(() => lastEnabled()?.[0] === false, 'the disabling schedule reaches the pump');
    expect(await head()).toMatchObject({ stop: { cause: 'person' }, schedule: { mlPerDay: 2.1, slotMl: 0.175 } });
    expect(await sitter.api.problem('resume', { params: { systemId } })).toMatchObject({ status: 403 });

    expect((await resume()).orders).toMatchObject([{ outcome: 'done' }]);
    await eventually(() => lastEnabled()?.[0] === true, 'the enabling schedule reaches the pump');
    expect(await head()).toMatchObject({ stop: null });
  });

  it('that is away is stopped when it comes back, by order and by schedule', async () => {
    await pump.drop();
    await eventually(() => !server.context.broker.isConnected(deviceId), 'the broker sees it go');
    expect((await stop()).orders).toMatchObject([{ outcome: 'waiting', at: null }]);
    expect(pump.stoppedHeads).toEqual(new Set());
    expect(await api.problem('resume', { params: { systemId } })).toMatchObject({ status: 409, rule: 'pump-offline' });

    pump.schedules.length = 0;
    await pump.connect(server.mqttPort);
    await pump.next('stop');
    await eventually(async () => (await newestOrder())?.outcome === 'done', 'the stop is answered');
    expect(pump.stoppedHeads).toEqual(new Set([1]));
    expect(pump.schedules[0]?.heads).toMatchObject([{ head: 1, enabled: false }]);
  });

  it('comes back stopped over a restart of the server in between', async () => {
    await pump.drop();
    await eventually(() => !server.context.broker.isConnected(deviceId), 'the broker sees it go');
    const [order] = (await stop()).orders;
    await restartServer();
    pump.schedules.length = 0;
    await pump.connect(server.mqttPort);
    expect(await pump.next('stop')).toEqual({ id: order?.id, expiresAtMs: null, head: 1, do: 'stop' });
    expect(pump.schedules[0]?.heads).toMatchObject([{ head: 1, enabled: false }]);
    await eventually(async () => (await newestOrder())?.outcome === 'done', 'the stop is answered');
  });

  it('that is silent gets the stop again until it answers, however late', async () => {
    pump.manner = 'silent';
    const startedMs = performance.now();
    const [order] = (await stop()).orders;
    const tookMs = performance.now() - startedMs;
    expect(order).toMatchObject({ outcome: 'no-answer' });
    expect(tookMs).toBeGreaterThan(4_900);
    expect(tookMs).toBeLessThan(7_000);
    await eventually(() => pump.orders.filter((one) => one.id === order?.id).length >= 2, 'the stop is sent again');
    expect(await api.problem('resume', { params: { systemId } })).toMatchObject({ status: 409, rule: 'stop-unanswered' });

    pump.manner = 'obeys';
    for (let repeat = 0; repeat < 3; repeat += 1) await pump.receipt(order?.id ?? '', 'done');
    expect(await newestOrder()).toMatchObject({ id: order?.id, outcome: 'done' });
  });

  it('that refuses is shown as refusing, and what it refuses does not happen', async () => {
    expect((await stop()).orders).toMatchObject([{ outcome: 'done' }]);
    pump.manner = 'refuses';
    expect((await resume()).orders).toMatchObject([{ outcome: 'refused', why: 'clock' }]);
    expect(await head()).toMatchObject({ stop: { cause: 'person' } });
    expect(lastEnabled()).toEqual([false]);
  });

  it('stopped by two people at once answers both', async () => {
    const sitter = await server.member(siteId, 'sitter');
    const [one, two] = await Promise.all([stop(), stop(sitter.api)]);
    expect([...one.orders, ...two.orders].map((order) => order.outcome)).toEqual(['done', 'done']);
    expect(pump.stoppedHeads).toEqual(new Set([1]));
  });

  it('is stopped while it is asked to resume', async () => {
    await stop();
    pump.manner = 'silent';
    const resuming = resume();
    await pump.next('resume');
    pump.manner = 'obeys';
    expect((await stop()).orders).toMatchObject([{ outcome: 'done' }]);
    const stoppedMs = performance.now();
    expect((await resuming).orders).toMatchObject([{ outcome: 'expired', why: 'stopped' }]);
    expect(performance.now() - stoppedMs).toBeLessThan(2_000);
    expect(await head()).toMatchObject({ stop: { cause: 'person' } });
  });

  it('that forgot its stop is told again as soon as it says so', async () => {
    await stop();
    await pump.drop();
    pump.stoppedHeads.clear();
    pump.orders.length = 0;
    await pump.connect(server.mqttPort);
    await eventually(() => pump.stoppedHeads.has(1), 'the pump is stopped again');
    expect(pump.orders).toMatchObject([{ head: 1, do: 'stop' }]);
  });
});
