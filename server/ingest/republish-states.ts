import type { Broker } from '../../broker/broker.ts';
import { topicOf } from '#shared/mqtt/topics.ts';
import type { Reader } from '../db/open.ts';

/**
 * The embedded broker keeps retained messages in memory only, so what each device last said of itself is published
 * again from its row when the server starts. Not for an external broker, which has kept the device's own words.
 */
export async function republishStates(reader: Reader, broker: Pick<Broker, 'publish'>): Promise<void> {
  const rows = await reader.selectFrom('deviceState').selectAll().execute();
  for (const row of rows) {
    const heads: unknown = JSON.parse(row.heads);
    const state = { online: row.online === 1, atMs: row.heardAtMs, scheduleVersion: row.scheduleVersion, heads };
    await broker.publish(topicOf(row.deviceId, 'state'), JSON.stringify(state), { retain: true, qos: 1 });
  }
}
