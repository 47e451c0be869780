import { z } from 'zod';
import type { Head } from '#shared/contract/rig.ts';
import { isoOf } from '#shared/time/iso-of.ts';
import { query } from '../db/open.ts';

/** Heads in use, each with what it is used for now, the schedule set for it and the stop that stands. */
export function headRows() {
  return query
    .selectFrom('headAssignment as assignment')
    .innerJoin('head', 'head.id', 'assignment.headId')
    .innerJoin('device', 'device.id', 'head.deviceId')
    .leftJoin('headSchedule as schedule', (join) => join.onRef('schedule.headId', '=', 'head.id').on('schedule.toMs', 'is', null))
    .leftJoin('headStop as stop', (join) =>
      join.onRef('stop.deviceId', '=', 'head.deviceId').onRef('stop.head', '=', 'head.head').on('stop.resumedAtMs', 'is', null),
    )
    .where('assignment.toMs', 'is', null)
    .select([
      'head.id',
      'head.siteId',
      'head.deviceId',
      'device.name as deviceName',
      'head.head',
      'head.createdAtMs',
      'assignment.id as assignmentId',
      'assignment.systemId',
      'assignment.kind',
      'assignment.productId',
      'assignment.reservoirId',
      'assignment.mlPerSecond',
      'assignment.smallestMl',
      'assignment.fromMs as assignedMs',
      'schedule.mlPerDay',
      'schedule.slotMl',
      'schedule.slotsUtcMin',
      'schedule.fromMs as scheduledMs',
      'stop.cause as stopCause',
      'stop.alarmId as stopAlarmId',
      'stop.stoppedAtMs',
      'stop.confirmedAtMs as stopConfirmedAtMs',
    ]);
}

export type HeadRow = ReturnType<typeof headRows> extends { execute(): Promise<(infer Found)[]> } ? Found : never;

const slotsSchema = z.array(z.number().int());

export function headOf(row: HeadRow): Head {
  const { mlPerDay, slotMl, slotsUtcMin, scheduledMs, stopCause, stoppedAtMs } = row;
  const confirmedAt = row.stopConfirmedAtMs === null ? null : isoOf(row.stopConfirmedAtMs);
  const isScheduled = mlPerDay !== null && slotMl !== null && slotsUtcMin !== null && scheduledMs !== null;
  return {
    id: row.id,
    deviceId: row.deviceId,
    deviceName: row.deviceName,
    head: row.head,
    systemId: row.systemId,
    kind: row.kind,
    productId: row.productId,
    reservoirId: row.reservoirId,
    mlPerSecond: row.mlPerSecond,
    smallestMl: row.smallestMl,
    schedule: isScheduled ? { mlPerDay, slotMl, slotsUtcMin: slotsSchema.parse(JSON.parse(slotsUtcMin)), since: isoOf(scheduledMs) } : null,
    stop:
      stopCause !== null && stoppedAtMs !== null
        ? { cause: stopCause, alarmId: row.stopAlarmId, at: isoOf(stoppedAtMs), confirmedAt }
        : null,
  };
}
