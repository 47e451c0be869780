import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { openTestBroker, type TestBroker } from '../helpers/broker.ts';
import { eventually } from '../helpers/eventually.ts';

let opened: TestBroker;

beforeEach(async () => {
  opened = await openTestBroker();
});

afterEach(() => opened.close());

describe('the fence around a device', () => {
  it('lets it publish its own four words', async () => {
    const device = opened.device();
    const client = await opened.connect(device);
    for (const word of ['senml', 'run', 'state', 'receipt'])
      await client.publishAsync(`steadfall/${device.username}/${word}`, '{}', { qos: 1 });
    expect(opened.received.map((message) => message.word)).toEqual(['senml', 'run', 'state', 'receipt']);
  });

  it.each([
    ['its own schedule', (own: string) => `steadfall/${own}/schedule`],
    ['its own orders', (own: string) => `steadfall/${own}/order`],
    ["another device's runs", (_own: string, other: string) => `steadfall/${other}/run`],
    ['a word that nobody knows', (own: string) => `steadfall/${own}/notes`],
    ['a level below its word', (own: string) => `steadfall/${own}/senml/deeper`],
    ['a leading slash', (own: string) => `/steadfall/${own}/senml`],
    ['another tree', () => 'elsewhere'],
    ["the broker's own topics", () => '$SYS/broker/clients'],
    ['a name that objects inherit', () => '__proto__'],
  ])('closes the connection of a device that publishes to %s', async (_name, topicOf) => {
    const device = opened.device();
    const other = opened.device();
    const client = await opened.connect(device);
    const closed = new Promise<void>((resolve) => client.once('close', () => resolve()));
    client.publish(topicOf(device.username, other.username), '{}', { qos: 1 });
    await closed;
    expect(opened.received).toEqual([]);
  });

  it('grants schedule and order, and answers 0x80 to every other subscription [MQTT-3.9.3-2]', async () => {
    const device = opened.device();
    const other = opened.device();
    const client = await opened.connect(device);
    const own = `steadfall/${device.username}`;
    const topics = [
      `${own}/schedule`,
      `${own}/order`,
      `${own}/state`,
      `${own}/+`,
      `${own}/#`,
      `steadfall/${other.username}/order`,
      'steadfall/+/order',
      '#',
      '+',
      '$SYS/#',
      `$share/group/${own}/order`,
    ];
    const granted: (number | undefined)[] = [];
    for (const topic of topics) {
      const [answer] = await client
        .subscribeAsync(topic, { qos: 1 })
        .catch((error: { packet?: { granted: number[] } }) => error.packet?.granted.map((qos) => ({ qos })) ?? []);
      granted.push(answer?.qos);
    }
    expect(granted).toEqual([1, 1, 128, 128, 128, 128, 128, 128, 128, 128, 128]);
    expect(client.connected).toBe(true);
  });

  it('keeps state to the connection whose client id is the device id', async () => {
    const device = opened.device();
    const second = await opened.connect({ ...device, clientId: `${device.username}:probes` });
    await second.publishAsync(`steadfall/${device.username}/senml`, '[]', { qos: 1 });
    const closed = new Promise<void>((resolve) => second.once('close', () => resolve()));
    second.publish(`steadfall/${device.username}/state`, '{"online":true}', { qos: 1 });
    await closed;
    expect(opened.received.map((message) => message.word)).toEqual(['senml']);
  });

  it('refuses a will outside the device, and a will of state from a second connection', async () => {
    const device = opened.device();
    const other = opened.device();
    const will = (deviceId: string) => ({
      topic: `steadfall/${deviceId}/state`,
      payload: Buffer.from('{"online":false}'),
      qos: 1 as const,
      retain: true,
    });
    await expect(opened.connect({ ...device, will: will(other.username) })).rejects.toThrow('Not authorized');
    await expect(opened.connect({ ...device, clientId: `${device.username}:2`, will: will(device.username) })).rejects.toThrow(
      'Not authorized',
    );
    await opened.connect({ ...device, will: will(device.username) });
  });

  it('does not deliver what a refused subscription of a kept session would have queued', async () => {
    const device = opened.device();
    const other = opened.device();
    const own = `steadfall/${device.username}/order`;
    const foreign = `steadfall/${other.username}/order`;
    const first = await opened.connect({ ...device, clean: false });
    await first.subscribeAsync({ [own]: { qos: 1 }, [foreign]: { qos: 1 } }).catch(() => undefined);
    await first.endAsync();
    await eventually(() => !opened.broker.isConnected(device.username), 'the device is gone');
    await opened.broker.publish(foreign, 'not yours', { retain: false, qos: 1 });
    await opened.broker.publish(own, 'yours', { retain: false, qos: 1 });

    const heard: string[] = [];
    const again = opened.begin({ ...device, clean: false });
    again.on('message', (_topic, payload) => heard.push(payload.toString()));
    await eventually(() => heard.includes('yours'), 'the queued order arrives');
    await opened.broker.publish(own, 'last', { retain: false, qos: 1 });
    await eventually(() => heard.includes('last'), 'a later order arrives');
    expect(heard).toEqual(['yours', 'last']);
  });
});
