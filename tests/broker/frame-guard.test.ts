import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { openTestBroker, type TestBroker } from '../helpers/broker.ts';
import { eventually } from '../helpers/eventually.ts';
import { connectFrame, connectRaw, frame, openRaw, publishFrame, text } from '../helpers/raw-mqtt.ts';

let opened: TestBroker;

beforeEach(async () => {
  opened = await openTestBroker({}, { connectTimeoutMs: 300 });
});

afterEach(() => opened.close());

function device() {
  const { username, password } = opened.device();
  return { username, password, clientId: username, topic: (word: string) => `steadfall/${username}/${word}` };
}

describe('before a device has signed in', () => {
  it('nothing longer than 1 KiB is read, however it is declared', async () => {
    const raw = await openRaw(opened.broker.port);
    // CONNECT that declares 256 MB, of which nothing comes.
    raw.send(Buffer.from([0x10, 0xff, 0xff, 0xff, 0x7f]));
    await raw.closed;
  });

  it('CONNECT of 1 KiB is taken, and one byte more closes the connection', async () => {
    const { username } = device();
    const ofBytes = (bytes: number) => {
      const empty = connectFrame({ clientId: username, username, password: '' }).length - 2;
      return connectFrame({ clientId: username, username, password: 'x'.repeat(bytes - empty) });
    };
    const fits = await openRaw(opened.broker.port);
    fits.send(ofBytes(1_024));
    expect((await fits.next()).body[1]).toBe(4);
    const tooBig = await openRaw(opened.broker.port);
    tooBig.send(ofBytes(1_025));
    await tooBig.closed;
    await expect(tooBig.next()).rejects.toThrow('closed');
  });

  it('a length of more than four bytes closes the connection (section 2.2.3)', async () => {
    const raw = await openRaw(opened.broker.port);
    raw.send(Buffer.from([0x10, 0xff, 0xff, 0xff, 0xff, 0x01]));
    await raw.closed;
  });

  it('another packet than CONNECT closes the connection [MQTT-3.1.0-1]', async () => {
    const raw = await openRaw(opened.broker.port);
    raw.send(publishFrame('steadfall/x/senml', '[]', 1));
    await raw.closed;
    expect(opened.received).toEqual([]);
  });

  it('silence closes the connection', async () => {
    const raw = await openRaw(opened.broker.port);
    await raw.closed;
  });

  it('a CONNECT that never ends closes the connection', async () => {
    const raw = await openRaw(opened.broker.port);
    raw.send(connectFrame(device()).subarray(0, 20));
    await raw.closed;
  });

  it('what follows CONNECT waits until the sign-in is decided, and is then taken', async () => {
    const one = device();
    const raw = await openRaw(opened.broker.port);
    const messages = Array.from({ length: 60 }, (_, index) => publishFrame(one.topic('senml'), `[${index}]`, index + 1));
    raw.send(connectFrame(one), ...messages);
    await eventually(() => raw.acknowledged().length === 60, 'all that was sent with CONNECT is acknowledged');
    expect(opened.received.map((message) => message.payload.toString())).toEqual(messages.map((_, index) => `[${index}]`));
  });

  it('what follows a refused CONNECT is not taken', async () => {
    const one = device();
    const raw = await openRaw(opened.broker.port);
    raw.send(connectFrame({ ...one, password: 'wrong' }), publishFrame(one.topic('senml'), '[]', 1));
    expect((await raw.next()).body[1]).toBe(4);
    await raw.closed;
    expect(opened.received).toEqual([]);
  });
});

describe('after a device has signed in', () => {
  it('frames are put together from bytes that come one by one', async () => {
    const one = device();
    const raw = await openRaw(opened.broker.port);
    const bytes = Buffer.concat([connectFrame(one), publishFrame(one.topic('senml'), '[1]', 1), publishFrame(one.topic('run'), '{}', 2)]);
    for (const byte of bytes) raw.send(Buffer.from([byte]));
    await eventually(() => raw.acknowledged().length === 2, 'both messages are acknowledged');
    expect(opened.received.map((message) => message.payload.toString())).toEqual(['[1]', '{}']);
  });

  it('a payload of 64 KiB is passed on whole', async () => {
    const one = device();
    const { raw } = await connectRaw(opened.broker.port, one);
    const payload = Buffer.alloc(65_536, 'a');
    raw.send(publishFrame(one.topic('senml'), payload, 1));
    await eventually(() => raw.acknowledged().length === 1, 'it is acknowledged');
    expect(opened.received[0]?.payload.equals(payload)).toBe(true);
  });

  it.each([65_537, 70_000, 5_000_000])(
    'a payload of %i bytes is cut to one byte too many, acknowledged, and what follows it is taken',
    async (bytes) => {
      const one = device();
      const { raw } = await connectRaw(opened.broker.port, one);
      raw.send(publishFrame(one.topic('senml'), Buffer.alloc(bytes, 'a'), 7), publishFrame(one.topic('run'), '{}', 8));
      await eventually(() => raw.acknowledged().length === 2, 'both are acknowledged');
      expect(raw.acknowledged()).toEqual([7, 8]);
      expect(opened.received.map((message) => [message.word, message.payload.length])).toEqual([
        ['senml', 65_537],
        ['run', 2],
      ]);
    },
  );

  it('a long topic does not make room for a longer message', async () => {
    const one = device();
    const { raw } = await connectRaw(opened.broker.port, one);
    raw.send(publishFrame('t'.repeat(60_000), Buffer.alloc(60_000), 1));
    await raw.closed;
  });

  it('a SUBSCRIBE of over 64 KiB closes the connection', async () => {
    const one = device();
    const { raw } = await connectRaw(opened.broker.port, one);
    const topics = Buffer.concat(
      Array.from({ length: 2_000 }, () => Buffer.concat([text('steadfall/x/order/and/more/of/it'), Buffer.from([1])])),
    );
    raw.send(frame(0x82, Buffer.concat([Buffer.from([0, 1]), topics])));
    await raw.closed;
  });

  it('a topic of more levels than any of ours closes only its own connection', async () => {
    const one = device();
    const { raw } = await connectRaw(opened.broker.port, one);
    raw.send(publishFrame('a/'.repeat(150), '', 1));
    await raw.closed;
    await connectRaw(opened.broker.port, device());
  });
});

describe('one address', () => {
  it('can open so many connections and no more, until one closes', async () => {
    await opened.close();
    opened = await openTestBroker({}, { maxSocketsPerAddress: 2 });
    const first = await connectRaw(opened.broker.port, device());
    await connectRaw(opened.broker.port, device());
    const third = await openRaw(opened.broker.port);
    await third.closed;
    first.raw.socket.destroy();
    await first.raw.closed;
    await eventually(async () => {
      const again = await openRaw(opened.broker.port);
      again.send(connectFrame(device()));
      return again.next().then(
        ({ body }) => body[1] === 0,
        () => false,
      );
    }, 'a place is free again');
  });
});

describe('a device that sends faster than its rate', () => {
  it('is read more slowly, and nothing is dropped', async () => {
    await opened.close();
    opened = await openTestBroker({}, { messagesPerSecond: 100, burst: 20 });
    const one = device();
    const { raw } = await connectRaw(opened.broker.port, one);
    const startedMs = performance.now();
    raw.send(...Array.from({ length: 70 }, (_, index) => publishFrame(one.topic('senml'), `[${index}]`, index + 1)));
    await eventually(() => raw.acknowledged().length === 70, 'all are acknowledged');
    expect(performance.now() - startedMs).toBeGreaterThan(480);
    expect(opened.received.map((message) => message.payload.toString())).toEqual(Array.from({ length: 70 }, (_, index) => `[${index}]`));
  });

  it('does not slow another device down, nor gain by connecting again or twice', async () => {
    await opened.close();
    opened = await openTestBroker({}, { messagesPerSecond: 10, burst: 5 });
    const fast = device();
    const other = device();
    const { raw } = await connectRaw(opened.broker.port, fast);
    raw.send(...Array.from({ length: 5 }, (_, index) => publishFrame(fast.topic('senml'), '[]', index + 1)));
    await eventually(() => raw.acknowledged().length === 5, 'the burst is acknowledged');
    const second = await connectRaw(opened.broker.port, { ...fast, clientId: `${fast.username}:2` });
    const startedMs = performance.now();
    second.raw.send(...Array.from({ length: 4 }, (_, index) => publishFrame(fast.topic('senml'), '[]', index + 1)));
    const others = await connectRaw(opened.broker.port, other);
    others.raw.send(publishFrame(other.topic('senml'), '[]', 1));
    await eventually(() => others.raw.acknowledged().length === 1, 'the other device is acknowledged');
    expect(second.raw.acknowledged().length).toBeLessThan(4);
    await eventually(() => second.raw.acknowledged().length === 4, 'the rest comes at the rate');
    expect(performance.now() - startedMs).toBeGreaterThan(250);
  });
});
