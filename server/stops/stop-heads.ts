import { uuidv7 } from 'uuidv7';
import { type Actor, recordAudit, systemActor } from '../audit/record-audit.ts';
import { markDirty, recordChange } from '../changes/record-change.ts';
import { query } from '../db/open.ts';
import type { Transaction } from '../db/writer.ts';
import { orderStop } from '../orders/insert-order.ts';
import { openStop } from '../orders/open-stop.ts';
import { reviseSchedule } from '../schedules/revise-schedule.ts';
import { carbonHeads, type HeadAddress, namedHeads, uniqueHeads, unregisteredHeads } from './target-heads.ts';

interface StopOfAnyCause {
  siteId: string;
  systemId: string;
  nowMs: number;
}

/** An alarm stops every carbon head of its system, every head that nobody registered, and the head concerned. */
export interface InterlockStop extends StopOfAnyCause {
  cause: 'interlock';
  alarmId: string;
  headConcerned: HeadAddress | null;
}

/** A person stops the carbon heads, or the heads named. */
export interface PersonStop extends StopOfAnyCause {
  cause: 'person';
  headIds: readonly string[] | undefined;
  actor: Actor;
}

export type Stop = InterlockStop | PersonStop;

function headsToStop(tx: Transaction, stop: Stop): HeadAddress[] {
  const { systemId, nowMs } = stop;
  if (stop.cause === 'person' && stop.headIds !== undefined) return uniqueHeads(namedHeads(tx, systemId, stop.headIds));
  const unregistered = unregisteredHeads(tx, systemId, nowMs, { evenIfIdle: stop.cause === 'interlock' });
  const concerned = stop.cause === 'interlock' && stop.headConcerned !== null ? [stop.headConcerned] : [];
  return uniqueHeads([...carbonHeads(tx, systemId), ...unregistered, ...concerned]);
}

/**
 * Stops heads, in one unit with whatever decided it: the state that keeps them stopped, the disabling schedule and the
 * stop order. Stopping what is stopped already sends the order again, and lets an interlock take over from a person.
 *
 * @returns the ids of the stop orders, one a head.
 */
export function stopHeads(tx: Transaction, stop: Stop): string[] {
  const { siteId, systemId, cause, nowMs } = stop;
  const alarmId = stop.cause === 'interlock' ? stop.alarmId : null;
  const actor = stop.cause === 'person' ? stop.actor : systemActor;
  const heads = headsToStop(tx, stop);

  for (const { deviceId, head } of heads) {
    const open = openStop(tx, deviceId, head);
    if (open === undefined) {
      const row = {
        id: uuidv7(),
        siteId,
        systemId,
        deviceId,
        head,
        cause,
        alarmId,
        stoppedAtMs: nowMs,
        confirmedAtMs: null,
        actorKind: actor.kind,
        actorId: actor.id,
        resumedAtMs: null,
        resumedBy: null,
      };
      tx.run(query.insertInto('headStop').values(row));
    } else if (cause === 'interlock' && open.cause === 'person') {
      tx.run(query.updateTable('headStop').set({ cause, alarmId }).where('id', '=', open.id));
    }
    const after = { cause, alarmId, deviceId, head };
    recordAudit(tx, { atMs: nowMs, siteId, actor, action: 'stop', entity: 'head', entityId: `${deviceId}/${head}`, after });
  }
  for (const deviceId of new Set(heads.map((head) => head.deviceId))) reviseSchedule(tx, { deviceId, cause: 'stop', actor, nowMs });
  recordChange(tx, { systemId, type: 'plan', atMs: nowMs, data: { reason: 'stop' } });
  markDirty(tx, systemId, nowMs);
  return heads.map(({ deviceId, head }) => orderStop(tx, { siteId, deviceId, head, causeAlarmId: alarmId, actor, nowMs }));
}
