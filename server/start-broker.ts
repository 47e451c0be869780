import { readFileSync } from 'node:fs';
import type { Broker, DeviceMessage } from '../broker/broker.ts';
import { createBroker } from '../broker/create-broker.ts';
import type { Context } from './context.ts';
import { connectExternalBroker } from './ingest/external-broker.ts';
import { republishStates } from './ingest/republish-states.ts';

function tlsOf({ TLS_CERT, TLS_KEY }: Context['core']['config']) {
  return TLS_CERT === undefined || TLS_KEY === undefined ? {} : { tls: { cert: readFileSync(TLS_CERT), key: readFileSync(TLS_KEY) } };
}

function startEmbedded({ core, devices, ingest, orders }: Context): Promise<Broker> {
  const { config, clock, log } = core;
  return createBroker({
    host: config.HOST,
    port: config.MQTT_PORT,
    ...tlsOf(config),
    log,
    policy: {
      authenticate: devices.authenticateDevice,
      receive: (message) => ingest.receive({ ...message, receivedMs: clock.nowMs() }),
      connected: (deviceId) => log.debug({ deviceId }, 'a device connected'),
      disconnected: (deviceId) => log.debug({ deviceId }, 'a device went away'),
      listening: orders.deviceConnected,
    },
  });
}

/** Opens the port for devices, or connects to the broker that they use, and puts there what they have to find. */
export async function startBroker(context: Context): Promise<Broker> {
  const { core, ingest, orders, schedules, broker: slot } = context;
  const { config, clock, log } = core;
  if (config.MQTT_URL !== undefined) {
    const policy = {
      receive: (message: DeviceMessage) => ingest.receive({ ...message, receivedMs: clock.nowMs() }),
      listening: orders.deviceConnected,
    };
    const broker = connectExternalBroker({ url: config.MQTT_URL, policy, log });
    slot.set(broker, broker.isUp);
    // It may be away, and has kept what was published: nothing waits for it.
    schedules.republishAll().catch((error: unknown) => log.warn({ err: error }, 'schedules are published later'));
    return broker;
  }
  const broker = await startEmbedded(context);
  slot.set(broker);
  await republishStates(core.reader, broker);
  await schedules.republishAll();
  return broker;
}
