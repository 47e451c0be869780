import { type ChildProcess, spawn } from 'node:child_process';
import { once } from 'node:events';
import { createServer } from 'node:net';
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { connectAsync, type MqttClient } from 'mqtt';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import type { Broker, DeviceMessage } from '../../../broker/broker.ts';
import { connectExternalBroker, laneOf } from '../../../server/ingest/external-broker.ts';
import { silentLog } from '../../helpers/broker.ts';
import { eventually } from '../../helpers/eventually.ts';

/** Against the broker that Debian packages. */

let folder: string;
let port: number;
let mosquitto: ChildProcess;
let device: MqttClient;
let broker: (Broker & { isUp(): boolean }) | null = null;

const deviceIds = Array.from({ length: 12 }, (_, index) => `device-${index}`);

async function freePort(): Promise<number> {
  const server = createServer().listen(0, '127.0.0.1');
  await once(server, 'listening');
  const address = server.address();
  server.close();
  await once(server, 'close');
  return typeof address === 'object' && address !== null ? address.port : 0;
}

async function open(receive: (message: DeviceMessage) => Promise<void>): Promise<void> {
  broker = connectExternalBroker({ url: `mqtt://127.0.0.1:${port}`, policy: { receive }, log: silentLog });
  const opened = broker;
  await eventually(() => opened.isUp(), 'all lanes are connected');
}

const send = (deviceId: string, text: string) => device.publishAsync(`steadfall/${deviceId}/senml`, text, { qos: 1 });

beforeEach(async () => {
  folder = mkdtempSync(path.join(tmpdir(), 'steadfall-mosquitto-'));
  port = await freePort();
  const config = path.join(folder, 'mosquitto.conf');
  writeFileSync(config, `listener ${port} 127.0.0.1\nallow_anonymous true\n`);
  mosquitto = spawn('/usr/sbin/mosquitto', ['-c', config], { stdio: 'ignore' });
  await eventually(
    () =>
      connectAsync(`mqtt://127.0.0.1:${port}`, { reconnectPeriod: 0 }, false).then(
        (client) => ((device = client), true),
        () => false,
      ),
    'the broker listens',
  );
});

afterEach(async () => {
  await broker?.close();
  broker = null;
  await device.endAsync(true);
  mosquitto.kill('SIGKILL');
  rmSync(folder, { recursive: true, force: true });
});

describe('an external broker', () => {
  it('is heard once for each message, in order for each device', async () => {
    const received: DeviceMessage[] = [];
    await open(async (message) => void received.push(message));
    const heard = () => received.filter((message) => message.word === 'senml');
    // The lanes may still be subscribing; a first message is sent until it comes.
    await eventually(async () => {
      for (const deviceId of deviceIds) await send(deviceId, 'first');
      return new Set(heard().map((message) => message.deviceId)).size === deviceIds.length;
    }, 'every lane listens');
    received.length = 0;
    for (let number = 0; number < 20; number++) for (const deviceId of deviceIds) await send(deviceId, String(number));
    const numbered = () => heard().filter((message) => message.payload.toString() !== 'first');
    await eventually(() => numbered().length >= 240, 'all arrive');
    for (const deviceId of deviceIds) {
      const own = numbered().filter((message) => message.deviceId === deviceId);
      expect(own.map((message) => message.payload.toString())).toEqual(Array.from({ length: 20 }, (_, number) => String(number)));
    }
  });

  it('has several messages in flight, and is told of each only once it is stored', async () => {
    const waiting = new Map<string, () => void>();
    await open(({ deviceId }) => new Promise((resolve) => waiting.set(deviceId, resolve)));
    const oneOfEach = [0, 1, 2, 3].map((lane) => deviceIds.find((deviceId) => laneOf(deviceId) === lane) ?? '');
    await eventually(async () => {
      for (const deviceId of oneOfEach.filter((candidate) => !waiting.has(candidate))) await send(deviceId, 'x');
      return waiting.size === 4;
    }, 'four messages are being stored at once');
    // Cut off before they are stored: the broker has been told of none, and gives them to the next start.
    await broker?.close();
    const again = new Set<string>();
    await open(async ({ deviceId }) => void again.add(deviceId));
    await eventually(() => oneOfEach.every((deviceId) => again.has(deviceId)), 'they come again');
  });

  it('hands over an old state as retained, which is no sign of life', async () => {
    await device.publishAsync('steadfall/device-1/state', '{"online":true}', { qos: 1, retain: true });
    const received: DeviceMessage[] = [];
    await open(async (message) => void received.push(message));
    await eventually(() => received.length === 1, 'the kept state arrives');
    expect(received[0]).toMatchObject({ deviceId: 'device-1', word: 'state', retained: true });
  });
});

it('spreads devices over the lanes', () => {
  const counts = [0, 0, 0, 0];
  for (let index = 0; index < 4_000; index++) {
    const lane = laneOf(`0195f1f5-0000-7000-8000-${String(index * 7_919).padStart(12, '0')}`);
    counts[lane] = (counts[lane] ?? 0) + 1;
  }
  for (const count of counts) expect(count).toBeGreaterThan(700);
});
