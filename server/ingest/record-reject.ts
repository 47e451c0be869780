import type { Transaction } from '../db/writer.ts';
import type { MessageDevice } from './ingest-port.ts';
import type { RefusalReason } from './refusal.ts';

/** Refused messages that are kept per device. Their number is counted without bound. */
const KEPT = 200;
const PAYLOAD_CHARACTERS = 2_000;

const insertSql = 'insert into reject (siteId, systemId, deviceId, topic, reason, payload, receivedMs) values (?, ?, ?, ?, ?, ?, ?)';
const pruneSql = `delete from reject where deviceId = ? and seq <=
  (select seq from reject where deviceId = ? order by seq desc limit 1 offset ${KEPT})`;
const countSql = `insert into rejectCount (deviceId, reason, count, lastMs) values (?, ?, 1, ?)
  on conflict do update set count = count + 1, lastMs = excluded.lastMs`;

export function recordReject(
  tx: Transaction,
  device: MessageDevice,
  message: { topic: string; payload: Buffer; receivedMs: number },
  reason: RefusalReason,
): void {
  const { topic, receivedMs } = message;
  const payload = message.payload.subarray(0, PAYLOAD_CHARACTERS).toString('utf8');
  tx.prepare(insertSql).run(device.siteId, device.systemId, device.id, topic, reason, payload, receivedMs);
  tx.prepare(pruneSql).run(device.id, device.id);
  tx.prepare(countSql).run(device.id, reason, receivedMs);
}
