import { clearInterval, clearTimeout, setInterval, setTimeout } from 'node:timers';
import { connect, type MqttClient } from 'mqtt';
import type { StatePayload } from '#shared/mqtt/payloads.ts';
import { downlinks, parseTopic, topicOf, type Downlink, type Uplink } from '#shared/mqtt/topics.ts';
import type { Random } from '../random.ts';
import type { Outbox } from './outbox.ts';

export interface MqttDeviceOptions {
  url: string;
  deviceId: string;
  password: string;
  /** For a broker on this machine with a certificate that nobody signed. */
  trustAnyCertificate?: boolean;
  outbox: Outbox;
  /** For the jitter of reconnecting: a thousand devices must not come back in one instant. */
  random: Random;
  /** What the device says of itself, asked for at the moment of sending. */
  describe(): StatePayload;
  /** `payload` is undefined when it is no JSON; an empty retained message is null. */
  onMessage(word: Downlink, payload: unknown): void;
  /** One line for whoever watches the process. */
  log(line: string): void;
  /** Messages under way at once. */
  window?: number;
}

export interface MqttDevice {
  /** Puts a message into the outbox, to go out in order. */
  send(word: Uplink, payload: unknown): void;
  /** Tells the state anew, when connected. */
  tellState(): void;
  /** Cuts the connection without a goodbye, as a lost network does, and stays away for a while. */
  goOffline(forMs: number): void;
  /** Resolves when at most so many messages are left in the outbox. */
  waitUntilLeft(atMost: number): Promise<void>;
  /** Resolves at the next connection, at once when there is one. */
  connected(): Promise<void>;
  /** Says goodbye and ends; what is in the outbox stays there. */
  close(): Promise<void>;
  /** Ends as a power cut does: no goodbye, the broker publishes the last will. */
  cut(): void;
}

const KEEP_ALIVE_S = 30;
const STATE_EVERY_MS = 60_000;
const RETRY_FROM_MS = 500;
const RETRY_AT_MOST_MS = 20_000;

/**
 * A device's connection: signs in with its own credentials, subscribes to its two topics, tells its state at every connection,
 * on demand and each minute, and sends its outbox in order at QoS 1. Every connection is a fresh client, so that what is sent
 * again after a loss is decided in one place, the outbox.
 */
export function createMqttDevice(options: MqttDeviceOptions): MqttDevice {
  const { deviceId, outbox, log } = options;
  const stateTopic = topicOf(deviceId, 'state');
  let client: MqttClient | null = null;
  let isUp = false;
  let isClosed = false;
  let attempts = 0;
  /** How many of the outbox, from the oldest, are under way on this connection. */
  let underWay = 0;
  const acknowledged = new Set<number>();
  let oldestNumber = 0;
  let retryTimer: NodeJS.Timeout | undefined;
  let waitingForRoom: { atMost: number; resolve: () => void }[] = [];
  let waitingForConnection: (() => void)[] = [];

  function open(): void {
    const mine = connect(options.url, {
      clientId: deviceId,
      username: deviceId,
      password: options.password,
      protocolVersion: 4,
      clean: true,
      keepalive: KEEP_ALIVE_S,
      connectTimeout: 10_000,
      reconnectPeriod: 0,
      resubscribe: false,
      rejectUnauthorized: options.trustAnyCertificate !== true,
      will: { topic: stateTopic, payload: Buffer.from(JSON.stringify({ online: false })), qos: 1, retain: true },
    });
    client = mine;
    mine.on('connect', () => {
      if (client === mine) welcome(mine);
    });
    mine.on('message', (topic, payload) => {
      const word = parseTopic(topic)?.word;
      if (client === mine && (word === 'schedule' || word === 'order')) options.onMessage(word, readJson(payload));
    });
    mine.on('error', (error) => log(`connection: ${error.message}`));
    mine.on('close', () => {
      if (client === mine) lost();
    });
  }

  function welcome(mine: MqttClient): void {
    isUp = true;
    attempts = 0;
    log('connected');
    mine.subscribe(
      downlinks.map((word) => topicOf(deviceId, word)),
      { qos: 1 },
      (error) => {
        if (error) log(`subscribe: ${error.message}`);
      },
    );
    tellState();
    pump();
    for (const resolve of waitingForConnection.splice(0)) resolve();
  }

  function lost(): void {
    if (isUp) log('disconnected');
    isUp = false;
    client = null;
    underWay = 0;
    acknowledged.clear();
    if (isClosed || retryTimer !== undefined) return;
    const longestMs = Math.min(RETRY_AT_MOST_MS, RETRY_FROM_MS * 2 ** attempts);
    attempts += 1;
    retryIn(longestMs * (0.5 + 0.5 * options.random.next()));
  }

  function retryIn(ms: number): void {
    clearTimeout(retryTimer);
    retryTimer = setTimeout(() => {
      retryTimer = undefined;
      if (!isClosed) open();
    }, ms);
  }

  function tellState(): void {
    if (!isUp || client === null) return;
    client.publish(stateTopic, JSON.stringify(options.describe()), { qos: 1, retain: true }, (error) => {
      if (error) log(`state: ${error.message}`);
    });
  }

  /** Sends on, while the window allows. */
  function pump(): void {
    const window = options.window ?? 16;
    while (isUp && client !== null && underWay < window) {
      const message = outbox.at(underWay);
      if (message === undefined) return;
      const mine = client;
      const number = oldestNumber + underWay;
      underWay += 1;
      mine.publish(topicOf(deviceId, message.word), message.payload, { qos: 1 }, (error) => {
        // A failed one is sent again from the outbox at the next connection.
        if (error || client !== mine) return;
        acknowledged.add(number);
        settle();
      });
    }
  }

  /** Takes out of the box, in order, what has been acknowledged. */
  function settle(): void {
    while (acknowledged.delete(oldestNumber)) {
      outbox.acknowledgeOldest();
      oldestNumber += 1;
      underWay -= 1;
    }
    const done = waitingForRoom.filter((one) => outbox.length <= one.atMost);
    waitingForRoom = waitingForRoom.filter((one) => !done.includes(one));
    for (const one of done) one.resolve();
    pump();
  }

  const stateTimer = setInterval(tellState, STATE_EVERY_MS);
  open();

  function end(): void {
    isClosed = true;
    isUp = false;
    clearInterval(stateTimer);
    clearTimeout(retryTimer);
  }

  return {
    send(word, payload) {
      outbox.push({ word, payload: JSON.stringify(payload) });
      pump();
    },
    tellState,
    goOffline(forMs) {
      const mine = client;
      log(`offline for ${Math.round(forMs / 1_000)} s`);
      retryIn(forMs);
      mine?.stream.destroy();
    },
    waitUntilLeft: (atMost) =>
      new Promise((resolve) => {
        if (outbox.length <= atMost) resolve();
        else waitingForRoom.push({ atMost, resolve });
      }),
    connected: () => (isUp ? Promise.resolve() : new Promise((resolve) => waitingForConnection.push(resolve))),
    async close() {
      const mine = client;
      const wasUp = isUp;
      end();
      if (mine === null) return outbox.close();
      if (wasUp) {
        // A broker that is going down itself may never answer; the will says the same then.
        const told = new Promise<void>((resolve) => {
          mine.publish(stateTopic, JSON.stringify({ ...options.describe(), online: false }), { qos: 1, retain: true }, () => resolve());
          mine.once('close', () => resolve());
          setTimeout(resolve, 1_000).unref();
        });
        await told;
      }
      await mine.endAsync(!wasUp);
      outbox.close();
    },
    cut() {
      const mine = client;
      end();
      client = null;
      mine?.stream.destroy();
      outbox.close();
    },
  };
}

function readJson(payload: Buffer): unknown {
  if (payload.length === 0) return null;
  try {
    return JSON.parse(payload.toString('utf8'));
  } catch (error) {
    if (error instanceof SyntaxError) return undefined;
    throw error;
  }
}
