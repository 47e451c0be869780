import { randomUUID } from 'node:crypto';
import mqtt, { type IClientOptions, type MqttClient } from 'mqtt';
import { createBroker, type BrokerLimits } from '../../broker/create-broker.ts';
import type { Broker, BrokerPolicy, DeviceMessage } from '../../broker/broker.ts';

export const silentLog = { info: () => {}, warn: () => {} };

export interface TestBroker {
  broker: Broker;
  /** What reached the policy, in order. */
  received: DeviceMessage[];
  /** `connected <id>`, `disconnected <id>`, `listening <id>`, in order. */
  happened: string[];
  passwords: Map<string, string>;
  /** Registers a device and gives its credentials. */
  device(): { username: string; password: string };
  connect(options?: IClientOptions & { username?: string }): Promise<MqttClient>;
  /** Begins to connect, so that a test can listen before anything arrives. */
  begin(options?: IClientOptions): MqttClient;
  close(): Promise<void>;
}

/** The broker on a free port, with a policy that accepts registered devices and keeps what it receives. */
export async function openTestBroker(policy: Partial<BrokerPolicy> = {}, limits: Partial<BrokerLimits> = {}): Promise<TestBroker> {
  const received: DeviceMessage[] = [];
  const happened: string[] = [];
  const passwords = new Map<string, string>();
  const clients: MqttClient[] = [];
  const broker = await createBroker({
    host: '127.0.0.1',
    port: 0,
    log: silentLog,
    limits,
    policy: {
      authenticate: async (username, password) => passwords.get(username) === password,
      receive: async (message) => void received.push(message),
      connected: (deviceId) => void happened.push(`connected ${deviceId}`),
      disconnected: (deviceId) => void happened.push(`disconnected ${deviceId}`),
      listening: (deviceId) => void happened.push(`listening ${deviceId}`),
      ...policy,
    },
  });
  return {
    broker,
    received,
    happened,
    passwords,
    device() {
      const username = randomUUID();
      passwords.set(username, `secret of ${username}`);
      return { username, password: `secret of ${username}` };
    },
    async connect(options = {}) {
      const client = await connectClient(broker.port, options);
      clients.push(client);
      return client;
    },
    begin(options = {}) {
      const client = mqtt.connect(addressOf(broker.port), { reconnectPeriod: 0, clientId: options.username, ...options });
      clients.push(client);
      return client;
    },
    async close() {
      await Promise.all(clients.map((client) => client.endAsync(true)));
      await broker.close();
    },
  };
}

const addressOf = (port: number) => `mqtt://127.0.0.1:${port}`;

/** Connects once, without trying again; rejects when the broker refuses. The client id is the username unless given. */
export function connectClient(port: number, options: IClientOptions = {}): Promise<MqttClient> {
  return mqtt.connectAsync(addressOf(port), { reconnectPeriod: 0, clientId: options.username, ...options }, false);
}
