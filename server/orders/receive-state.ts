import type { StatePayload } from '#shared/mqtt/payloads.ts';
import { systemActor } from '../audit/record-audit.ts';
import { query } from '../db/open.ts';
import type { Transaction } from '../db/writer.ts';
import { confirmStop, unconfirmStop } from './confirm-stop.ts';
import { orderStop, settleOrder, waitingOrders } from './insert-order.ts';
import { openStop } from './open-stop.ts';

/**
 * Holds what a pump says of its heads against what they are to be. A head that says `stopped` has answered its stop order.
 * One that is to be stopped and says anything else is told again, whatever it answered before: a stop is a state.
 *
 * @returns true when an order was settled or made by this.
 */
export function receiveState(tx: Transaction, device: { id: string; siteId: string }, state: StatePayload, receivedMs: number): boolean {
  let hasChanged = false;
  for (const { head, state: reported } of state.heads ?? []) {
    const waiting = waitingOrders(tx, device.id, head);
    if (reported === 'stopped') {
      // A resume on its way may undo what this report says: then only the receipt of the stop answers it.
      if (isResumeUnderWay(tx, device.id, head, receivedMs)) continue;
      confirmStop(tx, { deviceId: device.id, head, receivedMs });
      for (const order of waiting) {
        if (order.do !== 'stop') continue;
        settleOrder(tx, order.id, { state: 'done', why: null, atMs: receivedMs });
        hasChanged = true;
      }
      continue;
    }
    unconfirmStop(tx, { deviceId: device.id, head, receivedMs });
    const stop = openStop(tx, device.id, head);
    if (stop === undefined || waiting.some((order) => order.do === 'resume')) continue;
    orderStop(tx, { siteId: device.siteId, deviceId: device.id, head, causeAlarmId: stop.alarmId, actor: systemActor, nowMs: receivedMs });
    hasChanged = true;
  }
  return hasChanged;
}

function isResumeUnderWay(tx: Transaction, deviceId: string, head: number, nowMs: number): boolean {
  const resume = tx.first(
    query
      .selectFrom('deviceOrder')
      .select('id')
      .where('deviceId', '=', deviceId)
      .where('head', '=', head)
      .where('do', '=', 'resume')
      .where('state', 'in', ['waiting', 'superseded'])
      .where('attempts', '>', 0)
      .where('expiresAtMs', '>', nowMs),
  );
  return resume !== undefined;
}
