import { recordAudit } from '../audit/record-audit.ts';
import { markDirty, recordChange } from '../changes/record-change.ts';
import { query } from '../db/open.ts';
import type { Transaction } from '../db/writer.ts';
import type { OrderRow } from '../orders/insert-order.ts';
import { openStop } from '../orders/open-stop.ts';
import { reviseSchedule } from '../schedules/revise-schedule.ts';

/** The pump has resumed a head: its stop ends, and the schedule that lets it dose again follows. */
export function completeResume(tx: Transaction, order: OrderRow, receivedMs: number): void {
  const { deviceId, head, siteId } = order;
  const actor = { kind: order.actorKind, id: order.actorId };
  const stop = openStop(tx, deviceId, head);
  if (stop === undefined) return;
  tx.run(query.updateTable('headStop').set({ resumedAtMs: receivedMs, resumedBy: order.actorId }).where('id', '=', stop.id));
  reviseSchedule(tx, { deviceId, cause: 'resume', actor, nowMs: receivedMs });
  const after = { orderId: order.id, deviceId, head };
  recordAudit(tx, { atMs: receivedMs, siteId, actor, action: 'resume', entity: 'head', entityId: `${deviceId}/${head}`, after });
  recordChange(tx, { systemId: stop.systemId, type: 'plan', atMs: receivedMs, data: { reason: 'resume' } });
  markDirty(tx, stop.systemId, receivedMs);
}
