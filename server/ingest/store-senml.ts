import { uuidv7 } from 'uuidv7';
import { recordChange } from '../changes/record-change.ts';
import type { Transaction } from '../db/writer.ts';
import type { SampleStore } from '../telemetry/sample-store.ts';
import type { DecodedChannel, DecodedSenml } from './decode-senml.ts';
import type { MessageDevice } from './ingest-port.ts';
import { Refusal } from './refusal.ts';

const MAX_CHANNELS = 100;
/** What is older is history that is being uploaded, and no news for a browser. */
const NEWS_MS = 10 * 60_000;

interface SeriesHandle {
  key: number;
  id: string;
  unit: string;
}

const seriesSql = 'select key, id, unit from series where deviceId = ? and channel = ?';
const channelsSql = 'select count(*) as count from series where deviceId = ?';
const newSeriesSql = `insert into series (id, siteId, systemId, deviceId, channel, name, quantity, unit, lastMs, lastValue, conflicts, createdAtMs)
  values (?, ?, ?, ?, ?, null, ?, ?, null, null, 0, ?)`;
const lastSql = 'update series set lastMs = ?, lastValue = ? where key = ? and (lastMs is null or lastMs < ?)';
const conflictsSql = 'update series set conflicts = conflicts + ? where key = ?';
const ignoredSql = `insert into ignoredField (deviceId, field, count) values (?, ?, ?)
  on conflict do update set count = count + excluded.count`;

function findSeries(tx: Transaction, device: MessageDevice, channel: string): SeriesHandle | undefined {
  return tx.prepare(seriesSql).get(device.id, channel) as SeriesHandle | undefined;
}

/** Looks before anything is written, since a pack is stored whole or not at all. */
function checkChannels(tx: Transaction, device: MessageDevice, channels: readonly DecodedChannel[]): void {
  const unseen = new Set<string>();
  for (const { channel, as } of channels) {
    const known = findSeries(tx, device, channel);
    if (known === undefined) unseen.add(channel);
    else if (known.unit !== as.unit) throw new Refusal('unit-changed');
  }
  if (unseen.size === 0) return;
  const { count } = tx.prepare(channelsSql).get(device.id) as { count: number };
  if (count + unseen.size > MAX_CHANNELS) throw new Refusal('too-many-channels');
}

/** A channel that was not seen before becomes a series, which a keeper can name. */
function seriesOf(tx: Transaction, device: MessageDevice, { channel, as }: DecodedChannel, nowMs: number): SeriesHandle {
  const known = findSeries(tx, device, channel);
  if (known !== undefined) return known;
  const id = uuidv7();
  const made = tx.prepare(newSeriesSql).run(id, device.siteId, device.systemId, device.id, channel, as.quantity, as.unit, nowMs);
  recordChange(tx, { systemId: device.systemId, type: 'plan', atMs: nowMs, data: { reason: 'series' } });
  return { key: Number(made.lastInsertRowid), id, unit: as.unit };
}

/**
 * Stores a pack within the unit of work.
 * @returns true when anything of it was new.
 * @throws {Refusal} when it does not go with what the device's channels are.
 */
export function storeSenml(
  tx: Transaction,
  store: SampleStore,
  device: MessageDevice,
  { channels, ignored }: DecodedSenml,
  receivedMs: number,
  nowMs: number,
): boolean {
  checkChannels(tx, device, channels);
  let isNew = false;
  for (const decoded of channels) {
    const series = seriesOf(tx, device, decoded, nowMs);
    const { stored, conflicts } = store.append(tx, series.key, decoded.samples, receivedMs, nowMs);
    if (conflicts > 0) tx.prepare(conflictsSql).run(conflicts, series.key);
    const newest = stored.at(-1);
    if (newest === undefined) continue;
    isNew = true;
    tx.prepare(lastSql).run(newest.tMs, newest.value, series.key, newest.tMs);
    const news = stored.filter((sample) => sample.tMs > nowMs - NEWS_MS);
    if (news.length === 0) continue;
    const data = { seriesId: series.id, t: news.map((sample) => sample.tMs), v: news.map((sample) => sample.value) };
    recordChange(tx, { systemId: device.systemId, type: 'samples', atMs: nowMs, data });
  }
  for (const [field, count] of Object.entries(ignored)) tx.prepare(ignoredSql).run(device.id, field, count);
  return isNew;
}
