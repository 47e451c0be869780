import { connect as connectTls } from 'node:tls';
import { execFileSync } from 'node:child_process';
import { mkdtempSync, readFileSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import mqtt from 'mqtt';
import { createBroker } from '../../broker/create-broker.ts';
import { openTestBroker, silentLog, type TestBroker } from '../helpers/broker.ts';
import { eventually } from '../helpers/eventually.ts';
import { connectRaw, publishFrame, subscribeFrame } from '../helpers/raw-mqtt.ts';

let opened: TestBroker;

beforeEach(async () => {
  opened = await openTestBroker();
});

afterEach(() => opened.close());

function device() {
  const { username, password } = opened.device();
  return { username, password, clientId: username, topic: (word: string) => `steadfall/${username}/${word}` };
}

const offlineWill = (topic: string) => ({ topic, payload: Buffer.from('{"online":false}'), qos: 1 as const, retain: true });

describe('signing in', () => {
  it.each([
    ['a wrong password', { password: 'wrong' }, 4],
    ['an unknown username', { username: 'nobody', clientId: 'nobody' }, 4],
    ['no credentials', { username: undefined, password: undefined }, 4],
    ['a client id of another', { clientId: 'another' }, 2],
    ['a client id that only begins like the device', { suffix: 'x' }, 2],
    ['an empty client id [MQTT-3.1.3-8]', { clientId: '' }, 2],
    ['an empty client id that wants its session kept [MQTT-3.1.3-8]', { clientId: '', clean: false }, 2],
    ['a keep-alive over 60 s', { keepAlive: 61 }, 5],
    ['no keep-alive at all', { keepAlive: 0 }, 5],
  ])('with %s is refused', async (_name, { suffix, ...fields }: { suffix?: string } & Record<string, unknown>, code) => {
    const one = device();
    const { raw, returnCode } = await connectRaw(opened.broker.port, { ...one, clientId: one.clientId + (suffix ?? ''), ...fields });
    expect(returnCode).toBe(code);
    await raw.closed;
    expect(opened.happened).toEqual([]);
  });

  it('is open to the device id, and to the device id with a colon and anything', async () => {
    const one = device();
    for (const clientId of [one.username, `${one.username}:`, `${one.username}:probes/1`]) {
      expect((await connectRaw(opened.broker.port, { ...one, clientId })).returnCode).toBe(0);
    }
    expect(opened.happened).toEqual([`connected ${one.username}`]);
  });

  it('with MQTT 5 is refused as an unknown protocol level [MQTT-3.1.2-2]', async () => {
    await expect(opened.connect({ ...device(), protocolVersion: 5 })).rejects.toThrow();
  });

  it('that cannot be checked is refused as unavailable, and the broker goes on', async () => {
    await opened.close();
    opened = await openTestBroker({ authenticate: () => Promise.reject(new Error('no database')) });
    expect((await connectRaw(opened.broker.port, device())).returnCode).toBe(3);
    expect((await connectRaw(opened.broker.port, device())).returnCode).toBe(3);
  });

  it('cannot evict a device by its client id under another account', async () => {
    const one = device();
    const other = device();
    const client = await opened.connect(one);
    const { returnCode } = await connectRaw(opened.broker.port, { ...other, clientId: one.username });
    expect(returnCode).toBe(2);
    await client.publishAsync(one.topic('senml'), '[]', { qos: 1 });
    expect(client.connected).toBe(true);
  });
});

describe('the acknowledgement', () => {
  it('goes out only once the message is stored, and in the order of the messages [MQTT-4.6.0-2]', async () => {
    const stored: (() => void)[] = [];
    await opened.close();
    opened = await openTestBroker({ receive: () => new Promise<void>((resolve) => stored.push(resolve)) });
    const one = device();
    const { raw } = await connectRaw(opened.broker.port, one);
    raw.send(...[1, 2, 3].map((id) => publishFrame(one.topic('senml'), '[]', id)));
    await eventually(() => stored.length === 3, 'three messages wait');
    expect(raw.acknowledged()).toEqual([]);
    for (const release of stored) release();
    await eventually(() => raw.acknowledged().length === 3, 'they are acknowledged');
    expect(raw.acknowledged()).toEqual([1, 2, 3]);
  });

  it.each([
    ['rejects', () => Promise.reject(new Error('disk full'))],
    [
      'throws',
      () => {
        throw new Error('a bug');
      },
    ],
  ])('does not go out when storing %s: the connection closes and the broker lives', async (_name, receive) => {
    await opened.close();
    opened = await openTestBroker({ receive });
    const one = device();
    const { raw } = await connectRaw(opened.broker.port, one);
    raw.send(publishFrame(one.topic('senml'), '[]', 1));
    await raw.closed;
    expect(raw.acknowledged()).toEqual([]);
    expect((await connectRaw(opened.broker.port, one)).returnCode).toBe(0);
  });

  it('of one device does not wait for another, which is held', async () => {
    const held = device();
    await opened.close();
    opened = await openTestBroker({ receive: ({ deviceId }) => (deviceId === held.username ? new Promise(() => {}) : Promise.resolve()) });
    opened.passwords.set(held.username, held.password);
    const one = device();
    const slow = await connectRaw(opened.broker.port, held);
    slow.raw.send(publishFrame(held.topic('senml'), '[]', 1));
    const { raw } = await connectRaw(opened.broker.port, one);
    raw.send(publishFrame(one.topic('senml'), '[]', 1));
    await eventually(() => raw.acknowledged().length === 1, 'the other device is acknowledged');
    slow.raw.socket.destroy();
  }, 20_000);
});

describe('a last will', () => {
  it('is received in the name of a device that breaks off', async () => {
    const one = device();
    const client = await opened.connect({ ...one, will: offlineWill(one.topic('state')) });
    client.stream.destroy();
    await eventually(() => opened.received.length === 1, 'the will arrives');
    expect(opened.received[0]).toMatchObject({ deviceId: one.username, word: 'state', isWill: true, retained: false });
  });

  it('is not sent after DISCONNECT [MQTT-3.14.4-3]', async () => {
    const one = device();
    const client = await opened.connect({ ...one, will: offlineWill(one.topic('state')) });
    await client.endAsync();
    await eventually(() => opened.happened.includes(`disconnected ${one.username}`), 'the device is gone');
    expect(opened.received).toEqual([]);
  });

  it('of a connection that was replaced does not mark the device offline that has come back', async () => {
    const one = device();
    const will = offlineWill(one.topic('state'));
    const old = await opened.connect({ ...one, will });
    const oldClosed = new Promise<void>((resolve) => old.once('close', () => resolve()));
    const renewed = await opened.connect({ ...one, will });
    await oldClosed;
    await renewed.publishAsync(one.topic('state'), '{"online":true}', { qos: 1, retain: true });
    expect(opened.received.map((message) => message.isWill)).toEqual([false]);
    expect(opened.broker.isConnected(one.username)).toBe(true);
    renewed.stream.destroy();
    await eventually(() => opened.received.length === 2, 'the will of the newer connection still stands');
    expect(opened.received[1]?.isWill).toBe(true);
  });

  it('is ignored while the broker stops, which sends the will of every client', async () => {
    const one = device();
    const client = await opened.connect({ ...one, will: offlineWill(one.topic('state')) });
    const closed = new Promise<void>((resolve) => client.once('close', () => resolve()));
    await opened.broker.close();
    await closed;
    expect(opened.received).toEqual([]);
  });
});

describe('stopping', () => {
  it('waits for what is being stored, and acknowledges it', async () => {
    const stored: (() => void)[] = [];
    await opened.close();
    opened = await openTestBroker({ receive: () => new Promise<void>((resolve) => stored.push(resolve)) });
    const one = device();
    const { raw } = await connectRaw(opened.broker.port, one);
    raw.send(publishFrame(one.topic('senml'), '[]', 9));
    await eventually(() => stored.length === 1, 'the message is being stored');
    const closing = opened.broker.close();
    stored[0]?.();
    await closing;
    await raw.closed;
    expect(raw.acknowledged()).toEqual([9]);
  });

  it('closes connections that have not signed in', async () => {
    const { raw } = await connectRaw(opened.broker.port, device());
    await opened.broker.close();
    await raw.closed;
  });
});

describe('revocation', () => {
  it('cuts every connection of the device and no other', async () => {
    const one = device();
    const other = device();
    const first = await connectRaw(opened.broker.port, one);
    const second = await connectRaw(opened.broker.port, { ...one, clientId: `${one.username}:2` });
    const bystander = await connectRaw(opened.broker.port, other);
    opened.passwords.set(one.username, 'renewed');
    opened.broker.disconnect(one.username);
    await Promise.all([first.raw.closed, second.raw.closed]);
    expect(opened.broker.isConnected(one.username)).toBe(false);
    expect((await connectRaw(opened.broker.port, one)).returnCode).toBe(4);
    bystander.raw.send(publishFrame(other.topic('senml'), '[]', 1));
    await eventually(() => bystander.raw.acknowledged().length === 1, 'the other goes on');
  });

  it('catches a device that is just signing in with the password of before', async () => {
    const one = device();
    let password = one.password;
    const checks: (() => void)[] = [];
    await opened.close();
    opened = await openTestBroker({
      authenticate: async (_username, given) => {
        const isRight = given === password;
        await new Promise<void>((resolve) => checks.push(resolve));
        return isRight;
      },
    });
    const connecting = connectRaw(opened.broker.port, one);
    await eventually(() => checks.length === 1, 'the password is being checked');
    password = 'renewed';
    opened.broker.disconnect(one.username);
    checks[0]?.();
    await eventually(() => checks.length === 2, 'it is checked again');
    checks[1]?.();
    expect((await connecting).returnCode).toBe(4);
  });
});

describe('who is connected', () => {
  it('is told for the first connection of a device and the last', async () => {
    const one = device();
    const first = await opened.connect(one);
    const second = await opened.connect({ ...one, clientId: `${one.username}:2` });
    expect(opened.broker.isConnected(one.username)).toBe(true);
    await first.endAsync();
    await second.publishAsync(one.topic('senml'), '[]', { qos: 1 });
    expect(opened.broker.isConnected(one.username)).toBe(true);
    await second.endAsync();
    await eventually(() => !opened.broker.isConnected(one.username), 'the device is gone');
    expect(opened.happened).toEqual([`connected ${one.username}`, `disconnected ${one.username}`]);
  });

  it('listens once orders are subscribed, or when a kept session comes back with them', async () => {
    const one = device();
    const { raw } = await connectRaw(opened.broker.port, { ...one, clean: false });
    raw.send(subscribeFrame(1, [{ topic: one.topic('schedule'), qos: 1 }]));
    await raw.next();
    expect(opened.happened).toEqual([`connected ${one.username}`]);
    raw.send(subscribeFrame(2, [{ topic: one.topic('order'), qos: 1 }]));
    await raw.next();
    expect(opened.happened.at(-1)).toBe(`listening ${one.username}`);
    raw.socket.destroy();
    await eventually(() => opened.happened.length === 3, 'the device is gone');
    const again = await connectRaw(opened.broker.port, { ...one, clean: false });
    expect(again.sessionPresent).toBe(true);
    await eventually(() => opened.happened.at(-1) === `listening ${one.username}`, 'the kept subscription listens');
  });
});

describe('a flood without acknowledgements', () => {
  it('is survived when its subscriber leaves', async () => {
    const one = device();
    const subscriber = await connectRaw(opened.broker.port, one);
    subscriber.raw.send(subscribeFrame(1, [{ topic: one.topic('order'), qos: 0 }]));
    await subscriber.raw.next();
    subscriber.raw.socket.pause();
    const sent = Array.from({ length: 20_000 }, () =>
      opened.broker.publish(one.topic('order'), 'x'.repeat(200), { retain: false, qos: 0 }),
    );
    subscriber.raw.socket.destroy();
    await Promise.all(sent);
    expect((await connectRaw(opened.broker.port, one)).returnCode).toBe(0);
  });

  it('of 4,000 messages at QoS 0 arrives whole', async () => {
    await opened.close();
    opened = await openTestBroker({}, { messagesPerSecond: 100_000, burst: 5_000 });
    const one = device();
    const { raw } = await connectRaw(opened.broker.port, one);
    raw.send(...Array.from({ length: 4_000 }, (_, index) => publishFrame(one.topic('senml'), String(index), 0, { qos: 0 })));
    await eventually(() => opened.received.length === 4_000, 'all arrive');
    expect(opened.received.every((message, index) => message.payload.toString() === String(index))).toBe(true);
  });
});

describe('over TLS', () => {
  it('serves devices, and refuses plain TCP and TLS 1.1', async () => {
    const folder = mkdtempSync(path.join(tmpdir(), 'steadfall-tls-'));
    const [key, cert] = [path.join(folder, 'key.pem'), path.join(folder, 'cert.pem')];
    execFileSync(
      'openssl',
      [
        'req',
        '-x509',
        '-newkey',
        'ec',
        '-pkeyopt',
        'ec_paramgen_curve:prime256v1',
        '-nodes',
        '-days',
        '2',
        '-subj',
        '/CN=localhost',
        '-keyout',
        key,
        '-out',
        cert,
      ],
      { stdio: 'ignore' },
    );
    const secure = await createBroker({
      host: '127.0.0.1',
      port: 0,
      tls: { key: readFileSync(key), cert: readFileSync(cert) },
      log: silentLog,
      policy: {
        authenticate: async () => true,
        receive: async (message) => void opened.received.push(message),
        connected: () => {},
        disconnected: () => {},
      },
    });
    try {
      const client = await mqtt.connectAsync(`mqtts://localhost:${secure.port}`, {
        username: 'd',
        password: 'p',
        clientId: 'd',
        ca: readFileSync(cert),
        reconnectPeriod: 0,
      });
      await client.publishAsync('steadfall/d/senml', '[]', { qos: 1 });
      await client.endAsync();
      expect(opened.received).toHaveLength(1);
      await expect(connectRaw(secure.port, { clientId: 'd', username: 'd', password: 'p' })).rejects.toThrow('closed');
      const old = connectTls({
        port: secure.port,
        host: '127.0.0.1',
        maxVersion: 'TLSv1.1',
        minVersion: 'TLSv1',
        ca: readFileSync(cert),
        checkServerIdentity: () => undefined,
        ciphers: 'DEFAULT:@SECLEVEL=0',
      });
      await new Promise<void>((resolve, reject) => {
        old.once('error', () => resolve());
        old.once('secureConnect', () => reject(new Error('TLS 1.1 was accepted')));
      });
    } finally {
      await secure.close();
      rmSync(folder, { recursive: true });
    }
  });
});
