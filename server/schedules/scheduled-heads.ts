import { netVolumeLitres, type Volumes } from '#shared/domain/net-volume.ts';
import { query } from '../db/open.ts';
import type { Transaction } from '../db/writer.ts';
import { productCeilingMlPerDay } from '../products/product-ceiling.ts';

/** A head in use on a system, with the dose set for it now and the most that it should give. */
export interface ScheduledHead {
  headId: string;
  deviceId: string;
  head: number;
  kind: 'carbon' | 'other';
  smallestMl: number;
  /** The dose set, mL a day; 0 when none is. */
  mlPerDay: number;
  /** What the product's label or carbon allows in this system, mL a day; null when nothing tells. */
  ceilingMlPerDay: number | null;
}

export function scheduledHeads(tx: Transaction, system: Volumes & { id: string }): ScheduledHead[] {
  const netLitres = netVolumeLitres(system);
  const rows = tx.all(
    query
      .selectFrom('headAssignment')
      .innerJoin('head', 'head.id', 'headAssignment.headId')
      .leftJoin('headSchedule', (join) => join.onRef('headSchedule.headId', '=', 'head.id').on('headSchedule.toMs', 'is', null))
      .select([
        'head.id as headId',
        'head.deviceId',
        'head.head',
        'headAssignment.kind',
        'headAssignment.smallestMl',
        'headAssignment.productId',
        'headSchedule.mlPerDay',
      ])
      .where('headAssignment.systemId', '=', system.id)
      .where('headAssignment.toMs', 'is', null)
      .orderBy('head.deviceId')
      .orderBy('head.head'),
  );
  return rows.map(({ productId, mlPerDay, ...head }) => ({
    ...head,
    mlPerDay: mlPerDay ?? 0,
    ceilingMlPerDay: productId === null || netLitres === null ? null : productCeilingMlPerDay(tx, productId, netLitres),
  }));
}
