import type { AnswerOf } from '#shared/contract/endpoint.ts';
import type { controlEndpoints } from '#shared/contract/control.ts';
import type { Reader } from '../db/open.ts';
import { orderOutcome } from './order-outcome.ts';

const NEWEST = 50;

export type OrderList = AnswerOf<(typeof controlEndpoints)['listOrders']>['items'];

/** The newest orders to heads in use on a system, and to heads of its own pumps that nobody registered. */
export async function listOrders(reader: Reader, systemId: string, isConnected: (deviceId: string) => boolean): Promise<OrderList> {
  const rows = await reader
    .selectFrom('deviceOrder')
    .innerJoin('device', 'device.id', 'deviceOrder.deviceId')
    .leftJoin('head', (join) => join.onRef('head.deviceId', '=', 'deviceOrder.deviceId').onRef('head.head', '=', 'deviceOrder.head'))
    .leftJoin('headAssignment', (join) => join.onRef('headAssignment.headId', '=', 'head.id').on('headAssignment.toMs', 'is', null))
    .selectAll('deviceOrder')
    .where((where) => where(where.fn.coalesce('headAssignment.systemId', 'device.systemId'), '=', systemId))
    .orderBy('deviceOrder.createdAtMs', 'desc')
    .orderBy('deviceOrder.id', 'desc')
    .limit(NEWEST)
    .execute();
  return rows.map((row) => ({
    ...orderOutcome(row, isConnected(row.deviceId)),
    do: row.do,
    createdAt: new Date(row.createdAtMs).toISOString(),
  }));
}
