import type { Priority, SystemStatus } from '#shared/contract/systems.ts';
import { type Reader, query } from '../db/open.ts';
import { readRows } from '../db/read-rows.ts';
import { readPlannedVolumes } from '../doses/planned-volume.ts';
import { isoOf } from '#shared/time/iso-of.ts';
import { type SiteDay, siteDay } from './site-day.ts';

const priorities: Priority[] = ['low', 'medium', 'high', 'urgent'];

const openAlarms = (systemIds: string[]) =>
  query
    .selectFrom('alarm')
    .where('systemId', 'in', systemIds)
    .where('closedAtMs', 'is', null)
    .select(['systemId', 'priority', 'acknowledged', 'latched']);

/** Carbon heads in use, each with whether it is kept stopped, and whether its pump has said so. */
const carbonHeads = (systemIds: string[]) =>
  query
    .selectFrom('headAssignment')
    .innerJoin('head', 'head.id', 'headAssignment.headId')
    .leftJoin('headStop', (join) =>
      join.onRef('headStop.deviceId', '=', 'head.deviceId').onRef('headStop.head', '=', 'head.head').on('headStop.resumedAtMs', 'is', null),
    )
    .where('headAssignment.systemId', 'in', systemIds)
    .where('headAssignment.toMs', 'is', null)
    .where('headAssignment.kind', '=', 'carbon')
    .select(['headAssignment.systemId', 'headStop.id as stopId', 'headStop.confirmedAtMs']);

const heardDevices = (systemIds: string[]) =>
  query
    .selectFrom('device')
    .innerJoin('deviceState', 'deviceState.deviceId', 'device.id')
    .where('device.systemId', 'in', systemIds)
    .select(['device.systemId', 'deviceState.online', 'deviceState.heardAtMs']);

const carbonGiven = (systemIds: string[], day: SiteDay) =>
  query
    .selectFrom('doseLedger')
    .where('systemId', 'in', systemIds)
    .where('kind', '=', 'carbon')
    .where('atMs', '>=', day.fromMs)
    .where('atMs', '<', day.toMs)
    .groupBy('systemId')
    .select((select) => ['systemId', select.fn.sum<number>('deltaMl').as('ml')]);

/** The newest test of each nutrient, one row each. */
const newestTests = (systemIds: string[]) =>
  query
    .selectFrom((from) =>
      from
        .selectFrom('test')
        .where('systemId', 'in', systemIds)
        .where('quantity', 'in', ['nitrate', 'phosphate'])
        .where('deletedAtMs', 'is', null)
        .select((select) => [
          'systemId',
          'quantity',
          'atMs',
          'canonicalMgPerL',
          'qualifier',
          select.fn
            .agg<number>('row_number')
            .over((over) => over.partitionBy(['systemId', 'quantity']).orderBy('atMs', 'desc').orderBy('id', 'desc'))
            .as('place'),
        ])
        .as('ranked'),
    )
    .where('place', '=', 1)
    .selectAll();

interface SystemPlace {
  id: string;
  timeZone: string;
}

/**
 * The status of systems by their ids. The number of queries does not grow with the systems: one for each kind of fact,
 * and one more for each time zone, whose day begins at another moment.
 */
export async function readStatuses(reader: Reader, systems: readonly SystemPlace[], nowMs: number): Promise<Map<string, SystemStatus>> {
  const ids = systems.map((system) => system.id);
  const days = new Map(systems.map((system) => [system.timeZone, siteDay(system.timeZone, nowMs)]));
  // A slot due at midnight belongs to the day that begins; what is planned is asked for in windows open at their start.
  const firstMs = Math.min(...[...days.values()].map((day) => day.fromMs)) - 1;
  const lastMs = Math.max(...[...days.values()].map((day) => day.toMs));

  const [alarms, heads, devices, tests, planned, ...given] = await Promise.all([
    readRows(reader, openAlarms(ids)),
    readRows(reader, carbonHeads(ids)),
    readRows(reader, heardDevices(ids)),
    readRows(reader, newestTests(ids)),
    readPlannedVolumes(reader, ids, firstMs, lastMs),
    ...[...days].map(([timeZone, day]) => {
      const there = systems.filter((system) => system.timeZone === timeZone).map((system) => system.id);
      return readRows(reader, carbonGiven(there, day));
    }),
  ]);
  const givenMl = new Map(given.flat().map((row) => [row.systemId, row.ml]));

  return new Map(
    systems.map(({ id, timeZone }) => {
      const own = <Row extends { systemId: string }>(rows: Row[]) => rows.filter((row) => row.systemId === id);
      const ownAlarms = own(alarms);
      const ownHeads = own(heads);
      const ownDevices = own(devices);
      const latestTest = (quantity: string) => {
        const row = own(tests).find((test) => test.quantity === quantity);
        return row === undefined ? null : { at: isoOf(row.atMs), canonicalMgPerL: row.canonicalMgPerL, below: row.qualifier === '<' };
      };
      const day = days.get(timeZone) ?? siteDay(timeZone, nowMs);
      const plan = planned.get(id);
      const isPlanned = plan?.isScheduled(day.fromMs - 1, day.toMs - 1) ?? false;
      const plannedMl = (untilMs: number) => (isPlanned ? (plan?.plannedMl(day.fromMs - 1, untilMs) ?? 0) : null);
      const heardAtMs = Math.max(...ownDevices.map((device) => device.heardAtMs));
      return [
        id,
        {
          worstPriority: priorities.findLast((priority) => ownAlarms.some((alarm) => alarm.priority === priority)) ?? null,
          openAlarms: ownAlarms.length,
          unacknowledgedAlarms: ownAlarms.filter((alarm) => alarm.acknowledged === 0).length,
          latched: ownAlarms.some((alarm) => alarm.latched === 1),
          stoppedHeads: ownHeads.filter((head) => head.stopId !== null).length,
          unconfirmedStops: ownHeads.filter((head) => head.stopId !== null && head.confirmedAtMs === null).length,
          carbonHeads: ownHeads.length,
          offlineDevices: ownDevices.filter((device) => device.online === 0).length,
          heardAt: ownDevices.length === 0 ? null : isoOf(heardAtMs),
          givenTodayMl: givenMl.get(id) ?? 0,
          plannedTodayMl: plannedMl(day.toMs - 1),
          plannedSoFarMl: plannedMl(nowMs),
          nitrate: latestTest('nitrate'),
          phosphate: latestTest('phosphate'),
        },
      ];
    }),
  );
}
