import { UNSET_CLOCK_BELOW_MS, type StatePayload } from '#shared/mqtt/payloads.ts';
import { markDirty, recordChange } from '../changes/record-change.ts';
import { query } from '../db/open.ts';
import type { Row } from '../db/schema.ts';
import type { Transaction } from '../db/writer.ts';
import { deviceStateOf } from '../devices/device-rows.ts';
import type { MessageDevice } from './ingest-port.ts';
import { LATEST_MS } from './plausible-time.ts';

type StateRow = Row<'deviceState'>;

/** A device that says nothing for this long is offline. */
export const SILENCE_MS = 90_000;

const stateSql = 'select * from deviceState where deviceId = ?';
const heardSql = 'update deviceState set heardAtMs = max(heardAtMs, ?) where deviceId = ?';

export function deviceStateRow(tx: Transaction, deviceId: string): StateRow | undefined {
  return tx.prepare(stateSql).get(deviceId) as StateRow | undefined;
}

function neverHeard(deviceId: string, receivedMs: number): StateRow {
  return {
    deviceId,
    online: 0,
    heardAtMs: receivedMs,
    changedAtMs: receivedMs,
    scheduleVersion: null,
    clockOffsetMs: null,
    clockUnset: 0,
    heads: '[]',
  };
}

/** Writes the row with what goes with it: browsers are told, and the alarms of the system are looked at again. */
function write(tx: Transaction, device: MessageDevice, row: StateRow, nowMs: number): void {
  const { deviceId, ...values } = row;
  tx.run(
    query
      .insertInto('deviceState')
      .values(row)
      .onConflict((conflict) => conflict.column('deviceId').doUpdateSet(values)),
  );
  recordChange(tx, { systemId: device.systemId, type: 'state', atMs: nowMs, data: deviceStateOf({ deviceId, ...values }) });
  markDirty(tx, device.systemId, nowMs);
}

/** Any message is a sign of life. One that comes late from a history that is uploaded counts by its arrival. */
export function markHeard(tx: Transaction, device: MessageDevice, receivedMs: number, nowMs: number): void {
  const row = deviceStateRow(tx, device.id);
  if (row?.online === 1 || nowMs - receivedMs > SILENCE_MS) {
    if (row !== undefined) tx.prepare(heardSql).run(receivedMs, device.id);
    return;
  }
  const known = row ?? neverHeard(device.id, receivedMs);
  write(tx, device, { ...known, online: 1, heardAtMs: Math.max(known.heardAtMs, receivedMs), changedAtMs: receivedMs }, nowMs);
}

export function markOffline(tx: Transaction, device: MessageDevice, atMs: number, nowMs: number): void {
  const row = deviceStateRow(tx, device.id);
  if (row?.online === 0) return;
  write(tx, device, { ...(row ?? neverHeard(device.id, atMs)), online: 0, changedAtMs: atMs }, nowMs);
}

/** What the device's time tells of its clock: by how much it is off, or that it is not set. */
function clockOf(atMs: number | undefined, receivedMs: number): Partial<StateRow> {
  if (atMs === undefined) return {};
  const isSet = atMs >= UNSET_CLOCK_BELOW_MS && atMs < LATEST_MS;
  return { clockUnset: isSet ? 0 : 1, clockOffsetMs: isSet ? atMs - receivedMs : null };
}

/**
 * Keeps what a device says of itself. A state that a broker had kept (`retained`) is old: it tells what the pump was
 * doing, but nothing about its clock, and that it was online then does not make it so now.
 */
export function applyState(
  tx: Transaction,
  device: MessageDevice,
  state: StatePayload,
  { receivedMs, nowMs, retained }: { receivedMs: number; nowMs: number; retained: boolean },
): void {
  const row = deviceStateRow(tx, device.id) ?? neverHeard(device.id, receivedMs);
  const online = state.online && (!retained || row.online === 1) ? 1 : 0;
  const reported = state.heads?.map(({ head, state: doing, odometerMl, odometerEpoch }) => ({
    head,
    state: doing,
    odometerMl: odometerMl ?? null,
    odometerEpoch: odometerEpoch ?? null,
  }));
  write(
    tx,
    device,
    {
      ...row,
      online,
      heardAtMs: retained ? row.heardAtMs : Math.max(row.heardAtMs, receivedMs),
      changedAtMs: online === row.online ? row.changedAtMs : receivedMs,
      scheduleVersion: state.scheduleVersion === undefined ? row.scheduleVersion : state.scheduleVersion,
      heads: reported === undefined ? row.heads : JSON.stringify(reported),
      ...(retained ? {} : clockOf(state.atMs, receivedMs)),
    },
    nowMs,
  );
}
