import { z } from 'zod';
import { type Device, type DeviceState, reportedHeadSchema } from '#shared/contract/devices.ts';
import { isoOf } from '#shared/time/iso-of.ts';
import { query } from '../db/open.ts';
import type { Row } from '../db/schema.ts';

const headsSchema = z.array(reportedHeadSchema);

/** What a device last said of itself, in its REST shape. */
export function deviceStateOf(row: Row<'deviceState'>): DeviceState {
  return {
    deviceId: row.deviceId,
    online: row.online === 1,
    heardAt: isoOf(row.heardAtMs),
    changedAt: isoOf(row.changedAtMs),
    scheduleVersion: row.scheduleVersion,
    clockOffsetSeconds: row.clockOffsetMs === null ? null : row.clockOffsetMs / 1000,
    clockUnset: row.clockUnset === 1,
    heads: headsSchema.parse(JSON.parse(row.heads)),
  };
}

export function deviceRows() {
  return query
    .selectFrom('device')
    .leftJoin('deviceState as state', 'state.deviceId', 'device.id')
    .select((select) => [
      'device.id',
      'device.systemId',
      'device.name',
      'device.kind',
      'device.createdAtMs',
      'state.online',
      'state.heardAtMs',
      'state.changedAtMs',
      'state.scheduleVersion',
      'state.clockOffsetMs',
      'state.clockUnset',
      'state.heads',
      select
        .selectFrom('scheduleVersion')
        .whereRef('scheduleVersion.deviceId', '=', 'device.id')
        .orderBy('scheduleVersion.version', 'desc')
        .limit(1)
        .select('scheduleVersion.version')
        .as('publishedScheduleVersion'),
      select
        .selectFrom('rejectCount')
        .whereRef('rejectCount.deviceId', '=', 'device.id')
        .select((count) => count.fn.sum<number | null>('rejectCount.count').as('rejects'))
        .as('rejects'),
    ]);
}

type DeviceRow = ReturnType<typeof deviceRows> extends { execute(): Promise<(infer Found)[]> } ? Found : never;

export function deviceOf(row: DeviceRow): Device {
  const { online, heardAtMs, changedAtMs, clockUnset, heads } = row;
  const isHeard = online !== null && heardAtMs !== null && changedAtMs !== null && clockUnset !== null && heads !== null;
  return {
    id: row.id,
    systemId: row.systemId,
    name: row.name,
    kind: row.kind,
    state: isHeard
      ? deviceStateOf({
          deviceId: row.id,
          online,
          heardAtMs,
          changedAtMs,
          scheduleVersion: row.scheduleVersion,
          clockOffsetMs: row.clockOffsetMs,
          clockUnset,
          heads,
        })
      : null,
    publishedScheduleVersion: row.publishedScheduleVersion,
    rejects: row.rejects ?? 0,
  };
}
