import { uuidv7 } from 'uuidv7';
import type { Actor } from '../audit/record-audit.ts';
import { query } from '../db/open.ts';
import type { Row } from '../db/schema.ts';
import type { Transaction } from '../db/writer.ts';

export type OrderRow = Row<'deviceOrder'>;

/** All that is not a stop is done within this or not at all, so that nothing starts when nobody expects it any more. */
export const ORDER_LIFE_MS = 60_000;

export interface NewOrder {
  siteId: string;
  deviceId: string;
  head: number;
  do: OrderRow['do'];
  /** `ml` of a dose, `seconds` of a prime. */
  args?: { ml?: number; seconds?: number };
  causeAlarmId: string | null;
  actor: Actor;
  nowMs: number;
}

/** Puts an order in the outbox, within the unit that decides it. @returns its id. */
export function insertOrder(tx: Transaction, order: NewOrder): string {
  const id = uuidv7();
  tx.run(
    query.insertInto('deviceOrder').values({
      id,
      siteId: order.siteId,
      deviceId: order.deviceId,
      head: order.head,
      do: order.do,
      args: JSON.stringify(order.args ?? {}),
      createdAtMs: order.nowMs,
      expiresAtMs: order.do === 'stop' ? null : order.nowMs + ORDER_LIFE_MS,
      state: 'waiting',
      attempts: 0,
      nextSendMs: order.nowMs,
      outcomeAtMs: null,
      why: null,
      causeAlarmId: order.causeAlarmId,
      actorKind: order.actor.kind,
      actorId: order.actor.id,
    }),
  );
  return id;
}

/** Orders of one head that nobody has answered yet. */
export function waitingOrders(tx: Transaction, deviceId: string, head: number): OrderRow[] {
  return tx.all(
    query
      .selectFrom('deviceOrder')
      .selectAll()
      .where('state', '=', 'waiting')
      .where('deviceId', '=', deviceId)
      .where('head', '=', head)
      .orderBy('createdAtMs'),
  );
}

export function settleOrder(
  tx: Transaction,
  id: string,
  outcome: { state: Exclude<OrderRow['state'], 'waiting'>; why: string | null; atMs: number },
): void {
  tx.run(
    query
      .updateTable('deviceOrder')
      .set({ state: outcome.state, why: outcome.why, outcomeAtMs: outcome.atMs })
      .where('id', '=', id)
      .where('state', '=', 'waiting'),
  );
}

/**
 * Sees to it that a head is told to stop: sends an unanswered stop again at once, or makes a new one. What else still waits
 * for this head is taken back first. @returns the id of the stop order.
 */
export function orderStop(tx: Transaction, order: Omit<NewOrder, 'do' | 'args'>): string {
  const waiting = waitingOrders(tx, order.deviceId, order.head);
  for (const other of waiting) {
    if (other.do !== 'stop') settleOrder(tx, other.id, { state: 'superseded', why: 'stopped', atMs: order.nowMs });
  }
  const stop = waiting.find((one) => one.do === 'stop');
  if (stop === undefined) return insertOrder(tx, { ...order, do: 'stop' });
  tx.run(query.updateTable('deviceOrder').set({ nextSendMs: order.nowMs }).where('id', '=', stop.id));
  return stop.id;
}
