import { query } from '../db/open.ts';
import type { Transaction } from '../db/writer.ts';
import type { InterlockStop } from './stop-port.ts';

/**
 * While an interlock is latched every carbon head is to be stopped, also one that was registered, or became one for carbon,
 * after it had tripped.
 * @returns the stop that is missing, in the name of an alarm that stands latched; null when none is.
 */
export function missingStop(tx: Transaction, at: { siteId: string; systemId: string; nowMs: number }): InterlockStop | null {
  const { systemId } = at;
  const latched = tx.first(
    query
      .selectFrom('alarm')
      .select('id')
      .where('systemId', '=', systemId)
      .where('latched', '=', 1)
      .where('closedAtMs', 'is', null)
      .orderBy('id')
      .limit(1),
  );
  if (latched === undefined) return null;
  const free = tx.first(
    query
      .selectFrom('headAssignment')
      .innerJoin('head', 'head.id', 'headAssignment.headId')
      .leftJoin('headStop', (join) =>
        join
          .onRef('headStop.deviceId', '=', 'head.deviceId')
          .onRef('headStop.head', '=', 'head.head')
          .on('headStop.resumedAtMs', 'is', null),
      )
      .select(['head.deviceId', 'head.head'])
      .where('headAssignment.systemId', '=', systemId)
      .where('headAssignment.kind', '=', 'carbon')
      .where('headAssignment.toMs', 'is', null)
      .where('headStop.id', 'is', null)
      .limit(1),
  );
  return free === undefined ? null : { ...at, cause: 'interlock', alarmId: latched.id, headConcerned: null };
}
