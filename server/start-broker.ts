import { readFileSync } from 'node:fs';
import type { Broker } from '../broker/broker.ts';
import { createBroker } from '../broker/create-broker.ts';
import type { Context } from './context.ts';
import { republishStates } from './ingest/republish-states.ts';

function tlsOf({ TLS_CERT, TLS_KEY }: Context['core']['config']) {
  return TLS_CERT === undefined || TLS_KEY === undefined ? {} : { tls: { cert: readFileSync(TLS_CERT), key: readFileSync(TLS_KEY) } };
}

/** Opens the port for devices, and puts back what the broker of the last start had kept for them. */
export async function startBroker({ core, devices, ingest, orders, schedules, broker: slot }: Context): Promise<Broker> {
  const { config, clock, log } = core;
  const broker = await createBroker({
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
  slot.set(broker);
  await republishStates(core.reader, broker);
  await schedules.republishAll();
  return broker;
}
