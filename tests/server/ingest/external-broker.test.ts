import { createServer, type Server } from 'node:net';
import { once } from 'node:events';
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { Aedes } from 'aedes';
import { connectAsync, type MqttClient } from 'mqtt';
import { afterEach, beforeEach, expect, it } from 'vitest';
import { type Household, startTestServer, type TestServer } from '../../helpers/server.ts';

let broker: Aedes;
let listener: Server;
let url: string;
let folder: string;
let server: TestServer;
let house: Household;
let deviceId: string;
let device: MqttClient;

const start = () => startTestServer({ folder, environment: { MQTT_URL: url } });
const isReady = async () => (await fetch(`${server.url}/api/ready`)).status;
const runs = async () => (await house.owner.api('listRuns', { params: { systemId: house.systemId } })).items.map((run) => run.id);

function report(run: string): Promise<unknown> {
  const payload = { run, head: 1, phase: 'ended', atMs: Date.now(), ml: 0.5, cause: 'button' };
  return device.publishAsync(`steadfall/${deviceId}/run`, JSON.stringify(payload), { qos: 1 });
}

beforeEach(async () => {
  folder = mkdtempSync(path.join(tmpdir(), 'steadfall-external-'));
  broker = await Aedes.createBroker({ concurrency: 0 });
  listener = createServer(broker.handle).listen(0, '127.0.0.1');
  await once(listener, 'listening');
  const address = listener.address();
  url = `mqtt://127.0.0.1:${typeof address === 'object' && address !== null ? address.port : 0}`;
  server = await start();
  await expect.poll(isReady).toBe(200);
  house = await server.household();
  const made = await house.owner.api('createDevice', { params: { systemId: house.systemId }, body: { name: 'Pump', kind: 'pump' } });
  deviceId = made.device.id;
  device = await connectAsync(url, { clientId: deviceId });
});

afterEach(async () => {
  await device.endAsync(true);
  await server.close();
  await new Promise<void>((resolve) => broker.close(resolve));
  listener.close();
  rmSync(folder, { recursive: true, force: true });
});

it('takes what devices send to another broker, and tells them there what to do', async () => {
  await report('a');
  await expect.poll(runs).toEqual(['a']);
  const { systemId } = house;
  const use = { kind: 'carbon', mlPerSecond: 1, smallestMl: 0.1 } as const;
  const head = await house.owner.api('createHead', { params: { systemId }, body: { ...use, deviceId, head: 1 } });
  const schedule = new Promise<string>((resolve) => device.on('message', (_, payload) => resolve(payload.toString())));
  await device.subscribeAsync(`steadfall/${deviceId}/schedule`, { qos: 1 });
  const body = { heads: [{ headId: head.id, mlPerDay: 2, slots: 4 }], confirmUnknownCeiling: true };
  await house.owner.api('putSchedule', { params: { systemId }, body });
  expect(JSON.parse(await schedule)).toMatchObject({ heads: [{ head: 1, enabled: true, slotMl: 0.5 }] });
});

it('knows from its state and its last will whether a device is there', async () => {
  const state = (online: boolean) =>
    device.publishAsync(`steadfall/${deviceId}/state`, JSON.stringify(online ? { online, atMs: Date.now(), heads: [] } : { online }), {
      qos: 1,
      retain: true,
    });
  const isConnected = () => server.context.orders.isConnected(deviceId);
  await state(true);
  await expect.poll(isConnected).toBe(true);
  await state(false);
  await expect.poll(isConnected).toBe(false);
});

it('loses nothing that the broker kept while the server was down', async () => {
  await server.close();
  await report('while down');
  server = await start();
  house.owner.api = server.api(house.owner.token);
  await expect.poll(runs).toEqual(['while down']);
});

it('is not ready while the broker is away', async () => {
  listener.close();
  await new Promise<void>((resolve) => broker.close(resolve));
  await expect.poll(isReady).toBe(503);
});
