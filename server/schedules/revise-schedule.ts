import { z } from 'zod';
import { pumpCeilings } from '#shared/domain/pump-ceilings.ts';
import { type ScheduleHead, type SchedulePayload, schedulePayloadSchema } from '#shared/mqtt/payloads.ts';
import type { Actor } from '../audit/record-audit.ts';
import { query } from '../db/open.ts';
import type { Transaction } from '../db/writer.ts';

export interface Revision {
  deviceId: string;
  /** Why there is a new version: `set`, `stop`, `resume`, `head`. */
  cause: string;
  actor: Actor;
  nowMs: number;
}

const minutesSchema = z.array(z.number().int());

/** What the rows say that a pump should do: the doses set for its heads, none for a head that is kept stopped. */
function headsFromRows(tx: Transaction, deviceId: string): ScheduleHead[] {
  const rows = tx.all(
    query
      .selectFrom('head')
      .innerJoin('headAssignment', (join) => join.onRef('headAssignment.headId', '=', 'head.id').on('headAssignment.toMs', 'is', null))
      .innerJoin('headSchedule', (join) => join.onRef('headSchedule.headId', '=', 'head.id').on('headSchedule.toMs', 'is', null))
      .leftJoin('headStop', (join) =>
        join
          .onRef('headStop.deviceId', '=', 'head.deviceId')
          .onRef('headStop.head', '=', 'head.head')
          .on('headStop.resumedAtMs', 'is', null),
      )
      .select(['head.head', 'headAssignment.mlPerSecond', 'headSchedule.slotMl', 'headSchedule.slotsUtcMin', 'headStop.id as stopId'])
      .where('head.deviceId', '=', deviceId)
      .orderBy('head.head'),
  );
  return rows.map(({ head, mlPerSecond, slotMl, slotsUtcMin: minutes, stopId }) => {
    const slotsUtcMin = minutesSchema.parse(JSON.parse(minutes));
    return {
      head,
      enabled: stopId === null && slotsUtcMin.length > 0,
      slotMl,
      slotsUtcMin,
      mlPerSecond,
      ...pumpCeilings(slotMl, slotsUtcMin),
    };
  });
}

/**
 * Brings the schedule of a pump in line with the rows: writes its next version, to be published, if what it should do
 * changed. Call it in the same unit as any change to a head's dose, use or stop.
 *
 * A version is named by the Unix seconds, or one more than the last: a restored backup repeats none.
 *
 * @returns the new version; null when the newest one says the same already.
 */
export function reviseSchedule(tx: Transaction, { deviceId, cause, actor, nowMs }: Revision): number | null {
  const device = tx.first(query.selectFrom('device').select('siteId').where('id', '=', deviceId));
  if (device === undefined) throw new Error(`There is no device ${deviceId} to schedule`);
  const last = tx.first(
    query
      .selectFrom('scheduleVersion')
      .select(['version', 'body', 'fromMs'])
      .where('deviceId', '=', deviceId)
      .orderBy('version', 'desc')
      .limit(1),
  );
  const heads = headsFromRows(tx, deviceId);
  if (last === undefined ? heads.length === 0 : isSame(last.body, heads)) return null;

  const payload: SchedulePayload = { version: Math.max((last?.version ?? 0) + 1, Math.floor(nowMs / 1000)), heads };
  tx.run(
    query.insertInto('scheduleVersion').values({
      deviceId,
      version: payload.version,
      siteId: device.siteId,
      body: JSON.stringify(payload),
      // Versions follow each other in time even when the server's clock was set back in between.
      fromMs: Math.max(nowMs, last?.fromMs ?? 0),
      cause,
      actorKind: actor.kind,
      actorId: actor.id,
      publishedAtMs: null,
    }),
  );
  return payload.version;
}

function isSame(body: string, heads: ScheduleHead[]): boolean {
  const published = schedulePayloadSchema.parse(JSON.parse(body)).heads;
  return JSON.stringify(schedulePayloadSchema.shape.heads.parse(heads)) === JSON.stringify(published);
}
