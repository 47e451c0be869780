import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { openTestBroker, type TestBroker } from '../helpers/broker.ts';
import { eventually } from '../helpers/eventually.ts';
import { connectRaw, subscribeFrame } from '../helpers/raw-mqtt.ts';

let opened: TestBroker;
/** Runs in the turn of the event loop after a password was found to be right. */
let afterCheck = () => {};

beforeEach(async () => {
  afterCheck = () => {};
  opened = await openTestBroker({
    authenticate: async () => {
      setImmediate(() => afterCheck());
      return true;
    },
  });
});

afterEach(() => opened.close());

function device() {
  const { username, password } = opened.device();
  return { username, password, clientId: username, topic: (word: string) => `steadfall/${username}/${word}` };
}

describe('a password that is withdrawn', () => {
  it('between its check and the answer to the device lets nobody in', async () => {
    const one = device();
    afterCheck = () => opened.broker.disconnect(one.username);
    const { raw } = await connectRaw(opened.broker.port, one);
    await raw.closed;
    expect(opened.broker.isConnected(one.username)).toBe(false);
    expect(opened.happened).toEqual([]);
  });

  it('lets in the one that comes next', async () => {
    const one = device();
    opened.broker.disconnect(one.username);
    expect((await connectRaw(opened.broker.port, one)).returnCode).toBe(0);
    await eventually(() => opened.broker.isConnected(one.username), 'the device is connected');
  });
});

describe('the session of a second connection', () => {
  it('is not kept, so that ever new names cannot fill the memory', async () => {
    const one = device();
    const second = { ...one, clientId: `${one.username}:logger`, clean: false };
    const { raw } = await connectRaw(opened.broker.port, second);
    raw.send(subscribeFrame(1, [{ topic: one.topic('order'), qos: 1 }]));
    await eventually(() => opened.happened.includes(`listening ${one.username}`), 'the device listens');
    raw.socket.destroy();
    await eventually(() => !opened.broker.isConnected(one.username), 'the device is gone');
    expect((await connectRaw(opened.broker.port, second)).sessionPresent).toBe(false);
  });
});
