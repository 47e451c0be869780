import { connect, type IPublishPacket, type MqttClient } from 'mqtt';
import { setTimeout as sleep } from 'node:timers/promises';
import { parseTopic, uplinks, type Uplink } from '#shared/mqtt/topics.ts';
import type { Broker, BrokerLog, BrokerPolicy, DeviceMessage } from '../../broker/broker.ts';

export interface ExternalBrokerOptions {
  url: string;
  policy: Pick<BrokerPolicy, 'receive' | 'listening'>;
  log: BrokerLog;
}

const STORE_AGAIN_AFTER_MS = 1_000;

/**
 * The client hands over one message at a time, so one connection would wait for the disk at each. Every lane hears every
 * device and takes its own share of them, which needs no feature of the broker and keeps the order within a device.
 * The number must not change: a message that is still open in the session of one lane was passed over by the others.
 */
const LANES = 4;

function isUplink(word: string): word is Uplink {
  return uplinks.some((uplink) => uplink === word);
}

/** Null for what is not a message of a device. */
function readMessage({ topic, payload, retain }: IPublishPacket): DeviceMessage | null {
  const parsed = parseTopic(topic);
  if (parsed === null || !isUplink(parsed.word)) return null;
  return { deviceId: parsed.deviceId, word: parsed.word, payload: Buffer.from(payload), retained: retain, isWill: false };
}

/** Which lane takes the messages of a device: the same for ever, and about as many for each. */
export function laneOf(deviceId: string): number {
  let hash = 0;
  for (let at = 0; at < deviceId.length; at++) hash = (Math.imul(hash, 31) + deviceId.charCodeAt(at)) >>> 0;
  return hash % LANES;
}

/** What a device says of itself; a last will says `false`. Anything else says nothing. */
function saysOnline({ word, payload }: DeviceMessage): boolean | null {
  if (word !== 'state') return null;
  const text = payload.toString('utf8');
  if (/"online"\s*:\s*true/.test(text)) return true;
  return /"online"\s*:\s*false/.test(text) ? false : null;
}

interface Lane {
  client: MqttClient;
  /** Devices of this lane that said that they are there. */
  online: Set<string>;
}

/**
 * Stands in for the embedded broker where devices speak with another one, which signs them in and fences their topics by rules of
 * its own. A message is acknowledged once it is stored; what comes while the server is down waits in the sessions that the
 * broker keeps for it.
 */
export function connectExternalBroker({ url, policy, log }: ExternalBrokerOptions): Broker & { isUp(): boolean } {
  let isStopping = false;

  /** Tried until it is stored: the broker is told nothing before, and sends it again to the next start. */
  async function store(message: DeviceMessage): Promise<void> {
    for (;;) {
      try {
        return await policy.receive(message);
      } catch (error) {
        if (isStopping) throw error;
        log.warn({ deviceId: message.deviceId, error: String(error) }, 'A message could not be stored, and is tried again');
        await sleep(STORE_AGAIN_AFTER_MS);
      }
    }
  }

  async function take(message: DeviceMessage, online: Set<string>): Promise<void> {
    const isOnline = saysOnline(message);
    if (isOnline === false) online.delete(message.deviceId);
    await store(message);
    if (isOnline !== true || online.has(message.deviceId)) return;
    online.add(message.deviceId);
    policy.listening?.(message.deviceId);
  }

  function openLane(index: number): Lane {
    const online = new Set<string>();
    const clientId = `steadfall-server-${index}`;
    const client = connect(url, { clientId, clean: false, resubscribe: true, reconnectPeriod: 2_000 });
    // Called one message at a time; the acknowledgement goes out with the callback.
    client.handleMessage = (packet, done) => {
      const message = readMessage(packet);
      if (message === null || laneOf(message.deviceId) !== index) return done();
      take(message, online).then(
        () => done(),
        (error: unknown) => done(error instanceof Error ? error : new Error(String(error))),
      );
    };
    client.on('connect', () => {
      log.info({ clientId }, 'The external broker is connected');
      client.subscribe(
        uplinks.map((word) => `steadfall/+/${word}`),
        { qos: 1 },
        (error, granted) => {
          const refused = granted?.filter(({ qos }) => qos >= 128) ?? [];
          if (error || refused.length > 0) log.warn({ error: error?.message, refused }, 'The external broker refuses what devices send');
        },
      );
    });
    client.on('error', (error) => log.warn({ clientId, error: error.message }, 'The external broker'));
    client.on('close', () => online.clear());
    return { client, online };
  }

  const lanes = Array.from({ length: LANES }, (_, index) => openLane(index));
  const laneFor = (deviceId: string) => lanes[laneOf(deviceId)];

  return {
    port: Number(new URL(url).port || 1883),
    async publish(topic, payload, { retain, qos }) {
      const client = laneFor(parseTopic(topic)?.deviceId ?? '')?.client;
      if (client?.connected !== true) throw new Error('The external broker is not connected');
      await client.publishAsync(topic, payload, { retain, qos });
    },
    isUp: () => lanes.every(({ client }) => client.connected),
    isConnected: (deviceId) => laneFor(deviceId)?.online.has(deviceId) === true,
    disconnect(deviceId) {
      log.warn({ deviceId }, 'A password was renewed: the external broker has to be told, and to cut the device');
    },
    async close() {
      isStopping = true;
      await Promise.all(lanes.map(({ client }) => client.endAsync(true)));
    },
  };
}
