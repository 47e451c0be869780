import type { Client } from 'aedes';

/** Who is connected. The broker's own list loses count when a client leaves while it signs in, so this one is kept. */
export interface DeviceConnections {
  /** The client has signed in; from now on a client before it with the same id is replaced. */
  signIn(deviceId: string, client: Client): void;
  /** Returns true when this was the device's first connection. */
  open(deviceId: string, client: Client): boolean;
  /** Returns true when this was the device's last connection. */
  close(client: Client): boolean;
  deviceOf(client: Client): string | undefined;
  /** Whether a newer connection with the same client id has taken over: then this one's last will is stale. */
  isReplaced(client: Client): boolean;
  isConnected(deviceId: string): boolean;
  clientsOf(deviceId: string): Client[];
}

export function createDeviceConnections(): DeviceConnections {
  const devices = new WeakMap<Client, string>();
  const newest = new Map<string, Client>();
  const opened = new Map<string, Set<Client>>();

  return {
    signIn(deviceId, client) {
      devices.set(client, deviceId);
      newest.set(client.id, client);
    },
    open(deviceId, client) {
      const clients = opened.get(deviceId) ?? new Set<Client>();
      opened.set(deviceId, clients.add(client));
      return clients.size === 1;
    },
    close(client) {
      if (newest.get(client.id) === client) newest.delete(client.id);
      const deviceId = devices.get(client);
      const clients = deviceId === undefined ? undefined : opened.get(deviceId);
      if (deviceId === undefined || clients === undefined || !clients.delete(client) || clients.size > 0) return false;
      opened.delete(deviceId);
      return true;
    },
    deviceOf: (client) => devices.get(client),
    isReplaced: (client) => {
      const current = newest.get(client.id);
      return current !== undefined && current !== client;
    },
    isConnected: (deviceId) => opened.has(deviceId),
    clientsOf: (deviceId) => [...(opened.get(deviceId) ?? [])],
  };
}
