import type { OrderOutcome } from '#shared/contract/control.ts';
import type { Reader } from '../db/open.ts';
import { orderOutcome } from './order-outcome.ts';
import type { OrderRow } from './insert-order.ts';

/** Tells those who wait for an order that its row may have changed. */
export interface OrderNews {
  tell(orderIds: readonly string[]): void;
  /** @returns the unsubscriber. */
  listen(listener: (orderIds: readonly string[]) => void): () => void;
}

export function createOrderNews(): OrderNews {
  const listeners = new Set<(orderIds: readonly string[]) => void>();
  return {
    tell: (orderIds) => listeners.forEach((listener) => listener(orderIds)),
    listen(listener) {
      listeners.add(listener);
      return () => listeners.delete(listener);
    },
  };
}

export interface OutcomeWait {
  reader: Reader;
  news: OrderNews;
  isConnected(deviceId: string): boolean;
  orderIds: readonly string[];
  withinMs: number;
}

/**
 * What becomes of the orders within `withinMs`, in the order asked. Those for pumps that are away are not waited for. The
 * rows are the truth: news only wakes, so what was rolled back again never counts as an answer.
 */
export async function awaitOutcomes({ reader, news, isConnected, orderIds, withinMs }: OutcomeWait): Promise<OrderOutcome[]> {
  if (orderIds.length === 0) return [];
  let wake: () => void = () => undefined;
  let hasNews = false;
  let isOver = false;
  const stir = () => wake();
  const unsubscribe = news.listen((ids) => {
    if (!ids.some((id) => orderIds.includes(id))) return;
    hasNews = true;
    stir();
  });
  const timer = setTimeout(() => {
    isOver = true;
    stir();
  }, withinMs);

  try {
    for (;;) {
      hasNews = false;
      const orders = await readOrders(reader, orderIds);
      const isPending = orders.some((order) => order.state === 'waiting' && isConnected(order.deviceId));
      if (!isPending || isOver) return orders.map((order) => orderOutcome(order, isConnected(order.deviceId)));
      await new Promise<void>((resolve) => {
        wake = resolve;
        if (hasNews || isOver) resolve();
      });
    }
  } finally {
    clearTimeout(timer);
    unsubscribe();
  }
}

async function readOrders(reader: Reader, orderIds: readonly string[]): Promise<OrderRow[]> {
  const rows = await reader.selectFrom('deviceOrder').selectAll().where('id', 'in', orderIds).execute();
  return orderIds.flatMap((id) => rows.filter((row) => row.id === id));
}
