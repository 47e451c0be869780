import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { openTestBroker, type TestBroker } from '../helpers/broker.ts';
import { eventually } from '../helpers/eventually.ts';
import {
  connectFrame,
  connectRaw,
  disconnectFrame,
  frame,
  openRaw,
  pingFrame,
  publishFrame,
  type RawConnection,
  subscribeFrame,
  text,
} from '../helpers/raw-mqtt.ts';

/** What a client may rely on by MQTT 3.1.1 (OASIS standard), as far as the fence lets it use it. */

let opened: TestBroker;

beforeEach(async () => {
  opened = await openTestBroker();
});

afterEach(() => opened.close());

function device() {
  const { username, password } = opened.device();
  return { username, password, clientId: username, topic: (word: string) => `steadfall/${username}/${word}` };
}

type Device = ReturnType<typeof device>;

async function subscribed(one: Device, topics: { topic: string; qos: number }[], clean = true): Promise<RawConnection> {
  const { raw } = await connectRaw(opened.broker.port, { ...one, clean });
  raw.send(subscribeFrame(1, topics));
  expect((await raw.next()).type).toBe(9);
  return raw;
}

/** Reads a PUBLISH that came in. */
function read({ type, flags, body }: { type: number; flags: number; body: Buffer }) {
  expect(type).toBe(3);
  const topicBytes = body.readUInt16BE(0);
  const qos = (flags >> 1) & 3;
  const at = 2 + topicBytes;
  return {
    topic: body.toString('utf8', 2, at),
    qos,
    retain: (flags & 1) === 1,
    dup: (flags & 8) === 8,
    messageId: qos === 0 ? null : body.readUInt16BE(at),
    payload: body.toString('utf8', qos === 0 ? at : at + 2),
  };
}

const puback = (messageId: number) => frame(0x40, Buffer.from([messageId >> 8, messageId & 255]));

describe('sessions', () => {
  it('answer CONNECT with code 0 and no session present when the session is clean [MQTT-3.2.2-1]', async () => {
    const one = device();
    const { returnCode, sessionPresent } = await connectRaw(opened.broker.port, one);
    expect([returnCode, sessionPresent]).toEqual([0, false]);
  });

  it('are present when a kept one is resumed, and gone after a clean one [MQTT-3.2.2-2] [MQTT-3.1.2-6]', async () => {
    const one = device();
    const first = await subscribed(one, [{ topic: one.topic('order'), qos: 1 }], false);
    first.send(disconnectFrame);
    await first.closed;
    const second = await connectRaw(opened.broker.port, { ...one, clean: false });
    expect(second.sessionPresent).toBe(true);
    second.raw.send(disconnectFrame);
    await second.raw.closed;
    const third = await connectRaw(opened.broker.port, { ...one, clean: true });
    expect(third.sessionPresent).toBe(false);
    third.raw.send(disconnectFrame);
    await third.raw.closed;
    expect((await connectRaw(opened.broker.port, { ...one, clean: false })).sessionPresent).toBe(false);
  });

  it('that are kept get what came at QoS 1 while they were away, in order [MQTT-3.1.2-5] [MQTT-4.6.0-6]', async () => {
    const one = device();
    const first = await subscribed(one, [{ topic: one.topic('order'), qos: 1 }], false);
    first.send(disconnectFrame);
    await first.closed;
    await eventually(() => !opened.broker.isConnected(one.username), 'the device is gone');
    for (const payload of ['1', '2', '3']) await opened.broker.publish(one.topic('order'), payload, { retain: false, qos: 1 });
    const { raw } = await connectRaw(opened.broker.port, { ...one, clean: false });
    const heard: string[] = [];
    for (let index = 0; index < 3; index++) {
      const message = read(await raw.next());
      heard.push(message.payload);
      raw.send(puback(message.messageId ?? 0));
    }
    expect(heard).toEqual(['1', '2', '3']);
  });

  it('send an unacknowledged message again when they are resumed [MQTT-4.4.0-1]', async () => {
    const one = device();
    const first = await subscribed(one, [{ topic: one.topic('order'), qos: 1 }], false);
    await opened.broker.publish(one.topic('order'), 'stop', { retain: false, qos: 1 });
    expect(read(await first.next()).payload).toBe('stop');
    first.socket.destroy();
    await eventually(() => !opened.broker.isConnected(one.username), 'the device is gone');
    const { raw } = await connectRaw(opened.broker.port, { ...one, clean: false });
    expect(read(await raw.next()).payload).toBe('stop');
  });

  it('that are clean get nothing of what came meanwhile [MQTT-3.1.2-6]', async () => {
    const one = device();
    const first = await subscribed(one, [{ topic: one.topic('order'), qos: 1 }]);
    first.send(disconnectFrame);
    await first.closed;
    await eventually(() => !opened.broker.isConnected(one.username), 'the device is gone');
    await opened.broker.publish(one.topic('order'), 'missed', { retain: false, qos: 1 });
    const again = await subscribed(one, [{ topic: one.topic('order'), qos: 1 }]);
    await opened.broker.publish(one.topic('order'), 'heard', { retain: false, qos: 1 });
    expect(read(await again.next()).payload).toBe('heard');
  });

  it('of one client id: a second connection ends the first [MQTT-3.1.4-2]', async () => {
    const one = device();
    const { raw } = await connectRaw(opened.broker.port, one);
    expect((await connectRaw(opened.broker.port, one)).returnCode).toBe(0);
    await raw.closed;
  });

  it('end on a second CONNECT [MQTT-3.1.0-2]', async () => {
    const one = device();
    const { raw } = await connectRaw(opened.broker.port, one);
    raw.send(connectFrame(one));
    await raw.closed;
  });

  it('are refused to another protocol name [MQTT-3.1.2-1]', async () => {
    const raw = await openRaw(opened.broker.port);
    raw.send(connectFrame({ ...device(), protocol: { name: 'MQXX', level: 4 } }));
    await raw.closed;
  });
});

describe('retained messages', () => {
  it('reach a new subscriber with the retain flag, and one that listens already without it [MQTT-3.3.1-8] [MQTT-3.3.1-9]', async () => {
    const one = device();
    const schedule = one.topic('schedule');
    const early = await subscribed(one, [{ topic: schedule, qos: 1 }]);
    await opened.broker.publish(schedule, 'v1', { retain: true, qos: 1 });
    expect(read(await early.next())).toMatchObject({ payload: 'v1', retain: false, qos: 1 });
    const late = await subscribed({ ...one, clientId: `${one.username}:2` }, [{ topic: schedule, qos: 1 }]);
    expect(read(await late.next())).toMatchObject({ payload: 'v1', retain: true, qos: 1 });
  });

  it('are replaced by the next, and cleared by an empty one [MQTT-3.3.1-7] [MQTT-3.3.1-10]', async () => {
    const one = device();
    const schedule = one.topic('schedule');
    await opened.broker.publish(schedule, 'v1', { retain: true, qos: 1 });
    await opened.broker.publish(schedule, 'v2', { retain: true, qos: 1 });
    const first = await subscribed(one, [{ topic: schedule, qos: 1 }]);
    expect(read(await first.next()).payload).toBe('v2');
    await opened.broker.publish(schedule, '', { retain: true, qos: 1 });
    const second = await subscribed({ ...one, clientId: `${one.username}:2` }, [{ topic: schedule, qos: 1 }]);
    await opened.broker.publish(schedule, 'v3', { retain: false, qos: 1 });
    expect(read(await second.next())).toMatchObject({ payload: 'v3', retain: false });
  });

  it('come again when a subscription is repeated [MQTT-3.8.4-3]', async () => {
    const one = device();
    await opened.broker.publish(one.topic('schedule'), 'v1', { retain: true, qos: 1 });
    const raw = await subscribed(one, [{ topic: one.topic('schedule'), qos: 1 }]);
    expect(read(await raw.next()).payload).toBe('v1');
    raw.send(subscribeFrame(2, [{ topic: one.topic('schedule'), qos: 0 }]));
    expect((await raw.next()).body.at(-1)).toBe(0);
    expect(read(await raw.next())).toMatchObject({ payload: 'v1', retain: true, qos: 0 });
  });
});

describe('quality of service', () => {
  it('0 is neither acknowledged nor lost on a live connection [MQTT-3.3.4-1]', async () => {
    const one = device();
    const { raw } = await connectRaw(opened.broker.port, one);
    raw.send(publishFrame(one.topic('senml'), '[]', 0, { qos: 0 }), pingFrame);
    expect((await raw.next()).type).toBe(13);
    await eventually(() => opened.received.length === 1, 'it arrives');
  });

  it('1 is acknowledged with PUBACK of the same id [MQTT-4.3.2-2]', async () => {
    const one = device();
    const { raw } = await connectRaw(opened.broker.port, one);
    raw.send(publishFrame(one.topic('senml'), '[]', 0xabcd));
    const { type, body } = await raw.next();
    expect([type, body.readUInt16BE(0)]).toEqual([4, 0xabcd]);
  });

  it('2 is answered with PUBREC and PUBCOMP [MQTT-4.3.3-2]', async () => {
    const one = device();
    const { raw } = await connectRaw(opened.broker.port, one);
    raw.send(publishFrame(one.topic('senml'), '[]', 7, { qos: 2 }));
    expect((await raw.next()).type).toBe(5);
    raw.send(frame(0x62, Buffer.from([0, 7])));
    const { type, body } = await raw.next();
    expect([type, body.readUInt16BE(0)]).toEqual([7, 7]);
    expect(opened.received).toHaveLength(1);
  });

  it('of a delivery is the lower of both sides [MQTT-3.8.4-6]', async () => {
    const one = device();
    const raw = await subscribed(one, [{ topic: one.topic('order'), qos: 0 }]);
    await opened.broker.publish(one.topic('order'), 'stop', { retain: false, qos: 1 });
    expect(read(await raw.next())).toMatchObject({ payload: 'stop', qos: 0 });
  });
});

describe('subscriptions', () => {
  it('are answered with one code a topic, 0x80 for each that is refused [MQTT-3.8.4-5] [MQTT-3.9.3-2]', async () => {
    const one = device();
    const { raw } = await connectRaw(opened.broker.port, one);
    raw.send(
      subscribeFrame(0x1234, [
        { topic: one.topic('schedule'), qos: 1 },
        { topic: 'steadfall/#', qos: 1 },
        { topic: one.topic('order'), qos: 0 },
      ]),
    );
    const { type, body } = await raw.next();
    expect(type).toBe(9);
    expect([...body]).toEqual([0x12, 0x34, 1, 0x80, 0]);
  });

  it('end with UNSUBSCRIBE, which is acknowledged by its id [MQTT-3.10.4-4] [MQTT-3.10.4-2]', async () => {
    const one = device();
    const raw = await subscribed(one, [
      { topic: one.topic('order'), qos: 1 },
      { topic: one.topic('schedule'), qos: 1 },
    ]);
    raw.send(frame(0xa2, Buffer.concat([Buffer.from([0, 9]), text(one.topic('order'))])));
    const { type, body } = await raw.next();
    expect([type, body.readUInt16BE(0)]).toEqual([11, 9]);
    await opened.broker.publish(one.topic('order'), 'unheard', { retain: false, qos: 1 });
    await opened.broker.publish(one.topic('schedule'), 'heard', { retain: false, qos: 1 });
    expect(read(await raw.next()).payload).toBe('heard');
  });

  it('never hear topics that begin with a dollar sign [MQTT-4.7.2-1]', async () => {
    const one = device();
    const { raw } = await connectRaw(opened.broker.port, one);
    raw.send(subscribeFrame(1, [{ topic: '$SYS/#', qos: 0 }]));
    expect((await raw.next()).body.at(-1)).toBe(0x80);
  });

  it('with reserved bits other than 0010 close the connection [MQTT-3.8.1-1]', async () => {
    const one = device();
    const { raw } = await connectRaw(opened.broker.port, one);
    raw.send(frame(0x80, Buffer.concat([Buffer.from([0, 1]), text(one.topic('order')), Buffer.from([1])])));
    await raw.closed;
  });
});

describe('keeping alive', () => {
  it('PINGREQ is answered [MQTT-3.12.4-1]', async () => {
    const { raw } = await connectRaw(opened.broker.port, device());
    raw.send(pingFrame);
    expect((await raw.next()).type).toBe(13);
  });

  it('a client that says nothing for one and a half times its keep-alive is cut, with its will [MQTT-3.1.2-24]', async () => {
    const one = device();
    const will = { topic: one.topic('state'), payload: Buffer.from('{"online":false}'), qos: 1 as const, retain: true };
    // A second of keep-alive, of which the client itself knows nothing.
    const client = opened.begin({ ...one, keepalive: 1, will, reschedulePings: false, timerVariant: { set: () => 0, clear: () => {} } });
    await eventually(() => client.connected, 'it connects');
    await eventually(() => opened.received.some((message) => message.isWill), 'the will is sent');
  });
});

describe('what a client must not send', () => {
  it('a topic with a wildcard in PUBLISH closes the connection [MQTT-3.3.2-2]', async () => {
    const one = device();
    const { raw } = await connectRaw(opened.broker.port, one);
    raw.send(publishFrame(`steadfall/${one.username}/+`, '[]', 1));
    await raw.closed;
  });

  it('QoS 3 closes the connection [MQTT-3.3.1-4]', async () => {
    const one = device();
    const { raw } = await connectRaw(opened.broker.port, one);
    raw.send(frame(0x36, Buffer.concat([text(one.topic('senml')), Buffer.from([0, 1])])));
    await raw.closed;
    expect(opened.received).toEqual([]);
  });

  it('a message that is sent again after a broken connection is received again, marked or not [MQTT-3.3.1-1]', async () => {
    const one = device();
    const first = await connectRaw(opened.broker.port, one);
    first.raw.send(publishFrame(one.topic('run'), '{}', 5));
    await first.raw.next();
    first.raw.socket.destroy();
    const second = await connectRaw(opened.broker.port, one);
    second.raw.send(publishFrame(one.topic('run'), '{}', 5, { dup: true }));
    expect((await second.raw.next()).type).toBe(4);
    expect(opened.received).toHaveLength(2);
  });
});
