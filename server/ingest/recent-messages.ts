import type { RecentMessage } from './ingest-port.ts';

const KEPT_PER_DEVICE = 50;
const PAYLOAD_BYTES = 1_000;

interface Entry extends Omit<RecentMessage, 'payload'> {
  head: Buffer;
}

export interface RecentMessages {
  add(message: { deviceId: string; topic: string; payload: Buffer; receivedMs: number; outcome: string }): void;
  of(deviceId: string): RecentMessage[];
}

/** The newest messages of each device with what became of them, in memory: for whoever is setting the device up. */
export function createRecentMessages(): RecentMessages {
  const byDevice = new Map<string, Entry[]>();
  let seq = 0;
  return {
    add({ deviceId, topic, payload, receivedMs, outcome }) {
      const entries = byDevice.get(deviceId) ?? [];
      byDevice.set(deviceId, entries);
      // A copy, since a slice would keep the whole network buffer alive.
      const head = Buffer.from(payload.subarray(0, PAYLOAD_BYTES));
      entries.push({ seq: ++seq, receivedMs, topic, bytes: payload.length, outcome, head });
      if (entries.length > KEPT_PER_DEVICE) entries.shift();
    },
    of: (deviceId) => (byDevice.get(deviceId) ?? []).map(({ head, ...entry }) => ({ ...entry, payload: head.toString('utf8') })).reverse(),
  };
}
