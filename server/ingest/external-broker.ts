import { connect, type IPublishPacket } from 'mqtt';
import { setTimeout as sleep } from 'node:timers/promises';
import { parseTopic, uplinks, type Uplink } from '#shared/mqtt/topics.ts';
import type { Broker, BrokerLog, BrokerPolicy, DeviceMessage } from '../../broker/broker.ts';

export interface ExternalBrokerOptions {
  url: string;
  policy: Pick<BrokerPolicy, 'receive' | 'listening'>;
  log: BrokerLog;
}

const STORE_AGAIN_AFTER_MS = 1_000;

function isUplink(word: string): word is Uplink {
  return uplinks.some((uplink) => uplink === word);
}

/** Null for what is not a message of a device. */
function readMessage({ topic, payload, retain }: IPublishPacket): DeviceMessage | null {
  const parsed = parseTopic(topic);
  if (parsed === null || !isUplink(parsed.word)) return null;
  return { deviceId: parsed.deviceId, word: parsed.word, payload: Buffer.from(payload), retained: retain, isWill: false };
}

/** What a device says of itself; a last will says `false`. Anything else says nothing. */
function saysOnline({ word, payload }: DeviceMessage): boolean | null {
  if (word !== 'state') return null;
  const text = payload.toString('utf8');
  if (/"online"\s*:\s*true/.test(text)) return true;
  return /"online"\s*:\s*false/.test(text) ? false : null;
}

/**
 * Stands in for the embedded broker where devices speak with another one, which signs them in and fences their topics by rules of
 * its own. A message is acknowledged once it is stored; what comes while the server is down waits in the session that the
 * broker keeps for it.
 */
export function connectExternalBroker({ url, policy, log }: ExternalBrokerOptions): Broker & { isUp(): boolean } {
  const online = new Set<string>();
  const client = connect(url, { clientId: 'steadfall-server', clean: false, resubscribe: true, reconnectPeriod: 2_000 });
  let isStopping = false;

  async function take(message: DeviceMessage): Promise<void> {
    const isOnline = saysOnline(message);
    if (isOnline === false) online.delete(message.deviceId);
    // Tried until it is stored: the broker is told nothing before, and sends it again to the next start.
    for (;;) {
      try {
        await policy.receive(message);
        break;
      } catch (error) {
        if (isStopping) throw error;
        log.warn({ deviceId: message.deviceId, error: String(error) }, 'A message could not be stored, and is tried again');
        await sleep(STORE_AGAIN_AFTER_MS);
      }
    }
    if (isOnline !== true || online.has(message.deviceId)) return;
    online.add(message.deviceId);
    policy.listening?.(message.deviceId);
  }

  // Called one message at a time; the acknowledgement goes out with the callback.
  client.handleMessage = (packet, done) => {
    const message = readMessage(packet);
    if (message === null) return done();
    take(message).then(
      () => done(),
      (error: unknown) => done(error instanceof Error ? error : new Error(String(error))),
    );
  };
  client.on('connect', () => {
    log.info({}, 'The external broker is connected');
    client.subscribe(
      uplinks.map((word) => `steadfall/+/${word}`),
      { qos: 1 },
      (error, granted) => {
        const refused = granted?.filter(({ qos }) => qos >= 128) ?? [];
        if (error || refused.length > 0) log.warn({ error: error?.message, refused }, 'The external broker refuses what devices send');
      },
    );
  });
  client.on('error', (error) => log.warn({ error: error.message }, 'The external broker'));
  client.on('close', () => online.clear());

  return {
    port: Number(new URL(url).port || 1883),
    async publish(topic, payload, { retain, qos }) {
      if (!client.connected) throw new Error('The external broker is not connected');
      await client.publishAsync(topic, payload, { retain, qos });
    },
    isUp: () => client.connected,
    isConnected: (deviceId) => online.has(deviceId),
    disconnect(deviceId) {
      log.warn({ deviceId }, 'A password was renewed: the external broker has to be told, and to cut the device');
    },
    async close() {
      isStopping = true;
      await client.endAsync(true);
    },
  };
}
