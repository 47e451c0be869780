import { query } from '../db/open.ts';

/**
 * What a head of a device was used for at a time: the assignment that a run which began then takes. None for a head that
 * nobody had registered by then; such a run counts for the device's system as carbon of unknown strength.
 */
export function assignmentAt(deviceId: string, head: number, atMs: number) {
  return query
    .selectFrom('head')
    .innerJoin('headAssignment as assignment', 'assignment.headId', 'head.id')
    .where('head.deviceId', '=', deviceId)
    .where('head.head', '=', head)
    .where('assignment.fromMs', '<=', atMs)
    .where((where) => where.or([where('assignment.toMs', 'is', null), where('assignment.toMs', '>', atMs)]))
    .select([
      'head.id as headId',
      'assignment.systemId',
      'assignment.kind',
      'assignment.productId',
      'assignment.reservoirId',
      'assignment.mlPerSecond',
      'assignment.smallestMl',
    ]);
}
