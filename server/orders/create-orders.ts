import type { OrderOutcome } from '#shared/contract/control.ts';
import type { ReceiptPayload, StatePayload } from '#shared/mqtt/payloads.ts';
import type { Core } from '../core.ts';
import type { Transaction } from '../db/writer.ts';
import { awaitOutcomes, createOrderNews } from './await-outcomes.ts';
import type { DevicePublisher } from './device-publisher.ts';
import { dispatchOrders } from './dispatch-orders.ts';
import type { OrderRow } from './insert-order.ts';
import { listOrders, type OrderList } from './list-orders.ts';
import { receiveReceipt } from './receive-receipt.ts';
import { receiveState } from './receive-state.ts';
import { createWorkLoop } from './work-loop.ts';

export interface OrderingDevice {
  id: string;
  siteId: string;
  systemId: string;
}

/** Runs inside the unit that takes a receipt, for an order that this receipt settled. */
export type SettledListener = (tx: Transaction, order: OrderRow, receivedMs: number) => void;

export interface Orders {
  /** To be called inside the ingest unit of the message. */
  hooks: {
    onReceipt(tx: Transaction, device: OrderingDevice, receipt: ReceiptPayload, receivedMs: number): void;
    onState(tx: Transaction, device: OrderingDevice, state: StatePayload, receivedMs: number): void;
  };
  /** @returns the unsubscriber. */
  onSettled(listener: SettledListener): () => void;
  /** Called when a device has connected: the stops that wait for it are sent. */
  deviceConnected(deviceId: string): void;
  isConnected(deviceId: string): boolean;
  /** To be called inside a unit that put orders in the outbox: they are sent after its commit. */
  request(): void;
  /** Sends what is due now; resolves when that is done. */
  dispatch(): Promise<void>;
  /** What becomes of the orders, waiting at most 5 s for the pumps. */
  outcomes(orderIds: readonly string[]): Promise<OrderOutcome[]>;
  list(systemId: string): Promise<OrderList>;
  close(): Promise<void>;
}

const LOOK_EVERY_MS = 1_000;
const ANSWER_WITHIN_MS = 5_000;

/** The outbox of orders to pumps: committed first, then sent, until they have an outcome. All of it lives in rows. */
export function createOrders(core: Core, publisher: DevicePublisher): Orders {
  const news = createOrderNews();
  const listeners = new Set<SettledListener>();
  const returned = new Set<string>();
  let isTouched = false;

  const loop = createWorkLoop({
    name: 'Sending orders',
    writer: core.writer,
    log: core.log,
    everyMs: LOOK_EVERY_MS,
    work: () => dispatchOrders({ core, publisher, takeReturned: (deviceId) => returned.delete(deviceId), onSettled: news.tell }),
  });

  /** Inside a unit: rows of orders change with its commit. Should it be rolled back, those who look find nothing new. */
  function touch(): void {
    isTouched = true;
    loop.request();
  }

  const unsubscribe = core.writer.onCommitted(() => {
    if (!isTouched) return;
    isTouched = false;
    news.tell();
  });

  return {
    hooks: {
      onReceipt(tx, device, receipt, receivedMs) {
        const order = receiveReceipt(tx, device.id, receipt, receivedMs);
        touch();
        if (order !== null) listeners.forEach((listener) => listener(tx, order, receivedMs));
      },
      onState(tx, device, state, receivedMs) {
        if (receiveState(tx, device, state, receivedMs)) touch();
      },
    },
    onSettled(listener) {
      listeners.add(listener);
      return () => listeners.delete(listener);
    },
    deviceConnected(deviceId) {
      returned.add(deviceId);
      void loop.run();
    },
    isConnected: (deviceId) => publisher.isConnected(deviceId),
    request: touch,
    dispatch: () => loop.run(),
    outcomes: (orderIds) =>
      awaitOutcomes({
        reader: core.reader,
        news,
        isConnected: (deviceId) => publisher.isConnected(deviceId),
        orderIds,
        withinMs: ANSWER_WITHIN_MS,
      }),
    list: (systemId) => listOrders(core.reader, systemId, (deviceId) => publisher.isConnected(deviceId)),
    async close() {
      unsubscribe();
      await loop.close();
    },
  };
}
