import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import type { StatePayload } from '#shared/mqtt/payloads.ts';
import { createMqttDevice, type MqttDevice } from '../../../simulators/device/mqtt-device.ts';
import { memoryOutbox, type Outbox } from '../../../simulators/device/outbox.ts';
import { randomFrom } from '../../../simulators/random.ts';
import { openTestBroker, type TestBroker } from '../../helpers/broker.ts';
import { eventually } from '../../helpers/eventually.ts';

describe('a device on the broker', () => {
  let test: TestBroker;
  let device: MqttDevice | undefined;
  let heard: { word: string; payload: unknown }[];
  let outbox: Outbox;
  let said: string[];
  /** Refuses this many messages as a full disk does. */
  let failures = 0;
  const received: { word: string; payload: string; isWill: boolean }[] = [];

  beforeEach(async () => {
    heard = [];
    said = [];
    received.length = 0;
    failures = 0;
    outbox = memoryOutbox();
    test = await openTestBroker({
      receive: async ({ word, payload, isWill }) => {
        if (word !== 'state' && failures > 0) {
          failures -= 1;
          throw new Error('the disk is full');
        }
        received.push({ word, payload: payload.toString(), isWill });
      },
    });
  });
  afterEach(async () => {
    await device?.close();
    device = undefined;
    await test.close();
  });

  function start(credentials = test.device()): { deviceId: string; link: MqttDevice } {
    const state: StatePayload = { online: true, atMs: 1 };
    device = createMqttDevice({
      url: `mqtt://127.0.0.1:${test.broker.port}`,
      deviceId: credentials.username,
      password: credentials.password,
      outbox,
      random: randomFrom(1),
      describe: () => state,
      onMessage: (word, payload) => void heard.push({ word, payload }),
      log: (line) => void said.push(line),
    });
    return { deviceId: credentials.username, link: device };
  }
  const runs = () => received.filter((one) => one.word === 'run').map((one) => JSON.parse(one.payload) as number);

  it('tells its state first, and then in order what it had kept', async () => {
    for (let count = 0; count < 100; count += 1) outbox.push({ word: 'run', payload: String(count) });
    const { link } = start();
    await link.waitUntilLeft(0);
    expect(received[0]).toMatchObject({ word: 'state', payload: '{"online":true,"atMs":1}' });
    expect(runs()).toEqual(Array.from({ length: 100 }, (_, index) => index));
  });

  it('keeps what it has to say while it is offline, and sends all of it in order when it is back', async () => {
    const { link } = start();
    await link.connected();
    link.goOffline(50);
    await eventually(() => received.some((one) => one.isWill), 'its last will');
    for (let count = 0; count < 30; count += 1) link.send('run', count);
    await link.waitUntilLeft(0);
    expect(runs()).toEqual(Array.from({ length: 30 }, (_, index) => index));
  });

  it('sends again what was not acknowledged, and loses nothing', async () => {
    const { link } = start();
    failures = 2;
    for (let count = 0; count < 40; count += 1) link.send('run', count);
    await link.waitUntilLeft(0);
    expect([...new Set(runs())].sort((a, b) => a - b)).toEqual(Array.from({ length: 40 }, (_, index) => index));
  });

  it('hears the retained schedule and orders, at every connection', async () => {
    const credentials = test.device();
    await test.broker.publish(`steadfall/${credentials.username}/schedule`, '{"version":7}', { retain: true, qos: 1 });
    const { deviceId, link } = start(credentials);
    await eventually(() => heard.length === 1, 'the schedule');
    await test.broker.publish(`steadfall/${deviceId}/order`, '{"id":"a"}', { retain: false, qos: 1 });
    await eventually(() => heard.length === 2, 'the order');
    link.goOffline(1);
    await eventually(() => heard.length === 3, 'the schedule again');
    expect(heard.map((one) => one.word)).toEqual(['schedule', 'order', 'schedule']);
  });

  it('says goodbye at an orderly end, and leaves the will to a cut', async () => {
    await start().link.connected();
    await device?.close();
    await eventually(() => received.some((one) => one.payload.includes('"online":false') && !one.isWill), 'the goodbye');
    expect(received.some((one) => one.isWill)).toBe(false);
    const { link } = start();
    await link.connected();
    link.cut();
    device = undefined;
    await eventually(() => received.some((one) => one.isWill), 'the will');
  });

  it('goes on trying with a password that is wrong until it is right', async () => {
    const credentials = test.device();
    test.passwords.set(credentials.username, 'another');
    const { link } = start(credentials);
    await eventually(() => said.some((line) => line.includes('Connection refused')), `a refusal in ${said.join(', ')}`);
    expect(test.happened).toEqual([]);
    test.passwords.set(credentials.username, credentials.password);
    await link.connected();
    await eventually(() => test.happened.includes(`connected ${credentials.username}`), 'the connection');
  });
});
