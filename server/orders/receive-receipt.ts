import { type ReceiptPayload, UNSET_CLOCK_BELOW_MS } from '#shared/mqtt/payloads.ts';
import { systemActor } from '../audit/record-audit.ts';
import { query } from '../db/open.ts';
import type { Transaction } from '../db/writer.ts';
import { LATEST_MS } from '../ingest/plausible-time.ts';
import { confirmStop, unconfirmStop } from './confirm-stop.ts';
import { type OrderRow, orderStop, settleOrder } from './insert-order.ts';
import { openStop } from './open-stop.ts';

/**
 * Writes down what a pump answers. Repeated answers, those to orders of other devices and those to orders unknown here
 * change nothing.
 *
 * @returns the order when this receipt settled it, else null.
 */
export function receiveReceipt(tx: Transaction, deviceId: string, receipt: ReceiptPayload, receivedMs: number): OrderRow | null {
  const order = tx.first(query.selectFrom('deviceOrder').selectAll().where('id', '=', receipt.order).where('deviceId', '=', deviceId));
  if (order === undefined) return null;
  const { outcome } = receipt;
  if (order.state === 'waiting') {
    const isClockSet = receipt.atMs >= UNSET_CLOCK_BELOW_MS && receipt.atMs < LATEST_MS;
    const atMs = isClockSet ? receipt.atMs : receivedMs;
    settleOrder(tx, order.id, { state: outcome, why: receipt.why ?? null, atMs });
    if (order.do === 'stop' && outcome === 'done') confirmStop(tx, { deviceId, head: order.head, receivedMs });
    return { ...order, state: outcome, why: receipt.why ?? null, outcomeAtMs: atMs };
  }
  if (order.do === 'resume' && outcome === 'done') stopAgain(tx, order, receivedMs);
  return null;
}

/** A resume that came through after it was taken back or had expired here: the head is to be stopped, so tell it again. */
function stopAgain(tx: Transaction, order: OrderRow, nowMs: number): void {
  const stop = openStop(tx, order.deviceId, order.head);
  if (stop === undefined) return;
  const { siteId, deviceId, head } = order;
  unconfirmStop(tx, { deviceId, head, receivedMs: nowMs });
  orderStop(tx, { siteId, deviceId, head, causeAlarmId: stop.alarmId, actor: systemActor, nowMs });
}
