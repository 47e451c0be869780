import { z } from 'zod';
import type { OrderPayload } from '#shared/mqtt/payloads.ts';
import { topicOf } from '#shared/mqtt/topics.ts';
import type { Core } from '../core.ts';
import { query } from '../db/open.ts';
import type { DevicePublisher } from './device-publisher.ts';
import { type OrderRow, settleOrder } from './insert-order.ts';

export interface DispatchOptions {
  core: Core;
  publisher: DevicePublisher;
  /** True once for a device that has just come back: its stops are sent whatever their turn. */
  takeReturned(deviceId: string): boolean;
  /** Called when an order got an outcome without the pump. */
  onSettled(): void;
}

const STOP_EVERY_MS = 5_000;

/** How long after its end an order may still be answered: the pump did it in time, and its receipt is under way. */
const RECEIPT_GRACE_MS = 10_000;

const argsSchema = z.object({ ml: z.number().optional(), seconds: z.number().optional() });

function payloadOf(order: OrderRow): OrderPayload {
  return { id: order.id, expiresAtMs: order.expiresAtMs, head: order.head, do: order.do, ...argsSchema.parse(JSON.parse(order.args)) };
}

/**
 * Sends what waits in the outbox, oldest first. A stop goes out again every 5 s for as long as nobody answers it. Anything
 * else goes out once at most, since what starts a motor must not be repeated by us, and never to a pump that is away.
 */
export async function dispatchOrders({ core, publisher, takeReturned, onSettled }: DispatchOptions): Promise<void> {
  const { clock, log, reader, writer } = core;
  const nowMs = clock.nowMs();
  const orders = await reader
    .selectFrom('deviceOrder')
    .selectAll()
    .where('state', '=', 'waiting')
    .orderBy('createdAtMs')
    .orderBy('id')
    .execute();
  const returned = new Set([...new Set(orders.map((order) => order.deviceId))].filter(takeReturned));

  function send(order: OrderRow): void {
    // Not waited for: one pump that takes nothing must not hold back a stop for another.
    publisher
      .publish(topicOf(order.deviceId, 'order'), JSON.stringify(payloadOf(order)), { retain: false, qos: 1 })
      .catch((error: unknown) => {
        log.error({ error, orderId: order.id }, 'An order could not be sent');
      });
  }

  async function settle(order: OrderRow, state: 'expired' | 'refused', why: string | null): Promise<void> {
    await writer.commit((tx) => settleOrder(tx, order.id, { state, why, atMs: nowMs }));
    onSettled();
  }

  const countAttempt = (order: OrderRow) =>
    query
      .updateTable('deviceOrder')
      .set({ attempts: order.attempts + 1, nextSendMs: nowMs + STOP_EVERY_MS })
      .where('id', '=', order.id)
      .where('state', '=', 'waiting');

  async function sendStop(order: OrderRow): Promise<void> {
    if (!publisher.isConnected(order.deviceId)) return;
    // A turn that is further off than any can be was set before the clock was put back.
    const isItsTurn = order.nextSendMs <= nowMs || order.nextSendMs > nowMs + STOP_EVERY_MS;
    if (!isItsTurn && !returned.has(order.deviceId)) return;
    send(order);
    await writer.commit((tx) => tx.run(countAttempt(order)));
  }

  async function sendOnce(order: OrderRow, expiresAtMs: number): Promise<void> {
    if (nowMs > expiresAtMs + RECEIPT_GRACE_MS) return settle(order, 'expired', null);
    if (order.attempts > 0) return;
    if (nowMs > expiresAtMs) return settle(order, 'expired', null);
    if (!publisher.isConnected(order.deviceId)) return settle(order, 'refused', 'offline');
    // Counted first: after a crash in between it is not sent at all, rather than twice.
    const { changes } = await writer.commit((tx) => tx.run(countAttempt(order)));
    if (changes > 0) send(order);
  }

  // Stops first and at once; what starts a motor can wait for them.
  const stops = orders.flatMap((order) => (order.expiresAtMs === null ? [sendStop(order)] : []));
  await Promise.all(stops);
  for (const order of orders) if (order.expiresAtMs !== null) await sendOnce(order, order.expiresAtMs);
}
