import type { Core } from '../core.ts';
import { query } from '../db/open.ts';
import { readRows } from '../db/read-rows.ts';
import { markOffline, SILENCE_MS } from './device-presence.ts';

/** Marks devices offline that were silent for 90 s: they went away without a last will. */
export async function sweepSilent({ reader, writer }: Pick<Core, 'reader' | 'writer'>, nowMs: number): Promise<void> {
  const silent = query
    .selectFrom('deviceState')
    .innerJoin('device', 'device.id', 'deviceState.deviceId')
    .select(['device.id', 'device.siteId', 'device.systemId'])
    .where('deviceState.online', '=', 1)
    .where('deviceState.heardAtMs', '<=', nowMs - SILENCE_MS);
  // Looked up first, since this runs each second and there is hardly ever anything to write.
  if ((await readRows(reader, silent)).length === 0) return;
  await writer.commit((tx) => {
    for (const device of tx.all(silent)) markOffline(tx, device, nowMs, nowMs);
  });
}
