import type { OrderOutcome } from '#shared/contract/control.ts';
import type { Reader } from '../db/open.ts';
import { orderOutcome } from './order-outcome.ts';
import type { OrderRow } from './insert-order.ts';

/** Tells those who wait for an order that rows of orders may have changed. */
export interface OrderNews {
  tell(): void;
  /** @returns the unsubscriber. */
  listen(listener: () => void): () => void;
}

export function createOrderNews(): OrderNews {
  const listeners = new Set<() => void>();
  return {
    tell: () => listeners.forEach((listener) => listener()),
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
  const unsubscribe = news.listen(() => {
    hasNews = true;
    wake();
  });
  const timer = setTimeout(() => {
    isOver = true;
    wake();
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
