import type { Compilable } from 'kysely';
import { z } from 'zod';
import { scheduledSlots, type PublishedSchedule, type ScheduledSlot } from '#shared/domain/planned-slots.ts';
import { schedulePayloadSchema } from '#shared/mqtt/payloads.ts';
import { query, type Reader } from '../db/open.ts';
import type { Transaction } from '../db/writer.ts';

/** A slot of a carbon head of a system, on whichever pump. */
export interface SystemSlot extends ScheduledSlot {
  deviceId: string;
  headId: string;
}

/** What was planned for the carbon heads of one system over the window that it was loaded for. */
export interface PlannedVolume {
  /** Slots due in (`fromMs`, `toMs`] of heads that were enabled, ascending. */
  plannedSlots(fromMs: number, toMs: number): SystemSlot[];
  /** The same with the slots of heads that were kept stopped, told apart by `enabled`. */
  scheduledSlots(fromMs: number, toMs: number): SystemSlot[];
  /** Sum of the planned slots due in (`fromMs`, `toMs`], mL. */
  plannedMl(fromMs: number, toMs: number): number;
  /** The largest slot of an enabled head in any schedule in force within the window, mL; 0 when there is none. */
  largestSlotMl(fromMs: number, toMs: number): number;
  /** False when no schedule with an enabled carbon head that has slots was in force at any time in the window. */
  isScheduled(fromMs: number, toMs: number): boolean;
  /** The dose planned per day as steps: what it is at `fromMs`, and each later change before `toMs`. */
  dailySteps(fromMs: number, toMs: number): DailyStep[];
}

export interface DailyStep {
  fromMs: number;
  mlPerDay: number;
}

interface UseRow {
  systemId: string;
  headId: string;
  deviceId: string;
  head: number;
  fromMs: number;
  toMs: number | null;
}

interface VersionRow {
  deviceId: string;
  version: number;
  fromMs: number;
  body: string;
}

const schedulesSchema = z.string().transform((body) => schedulePayloadSchema.parse(JSON.parse(body)));

/** When which head gave carbon to the systems: assignments that overlap the window. */
function usesOf(systemIds: string[], fromMs: number, toMs: number): Compilable<UseRow> {
  return query
    .selectFrom('headAssignment')
    .innerJoin('head', 'head.id', 'headAssignment.headId')
    .select(['headAssignment.systemId', 'head.id as headId', 'head.deviceId', 'head.head', 'headAssignment.fromMs', 'headAssignment.toMs'])
    .where('headAssignment.systemId', 'in', systemIds)
    .where('headAssignment.kind', '=', 'carbon')
    .where('headAssignment.fromMs', '<', toMs)
    .where((where) => where.or([where('headAssignment.toMs', 'is', null), where('headAssignment.toMs', '>', fromMs)]));
}

/** The versions of these devices published in the window, and the one in force when it begins. */
function versionsOf(deviceIds: string[], fromMs: number, toMs: number): Compilable<VersionRow> {
  return query
    .selectFrom('scheduleVersion as v')
    .select(['v.deviceId', 'v.version', 'v.fromMs', 'v.body'])
    .where('v.deviceId', 'in', deviceIds)
    .where('v.fromMs', '<', toMs)
    .where((where) =>
      where(
        'v.fromMs',
        '>=',
        where.fn.coalesce(
          where
            .selectFrom('scheduleVersion as earlier')
            .select((select) => select.fn.max('earlier.fromMs').as('fromMs'))
            .whereRef('earlier.deviceId', '=', 'v.deviceId')
            .where('earlier.fromMs', '<=', fromMs),
          where.val(0),
        ),
      ),
    )
    .orderBy('v.deviceId')
    .orderBy('v.fromMs')
    .orderBy('v.version');
}

function assemble(uses: UseRow[], versions: VersionRow[]): PlannedVolume {
  const histories = new Map<string, PublishedSchedule[]>();
  for (const row of versions) {
    const history = histories.get(row.deviceId) ?? [];
    history.push({ fromMs: row.fromMs, version: row.version, heads: schedulesSchema.parse(row.body).heads });
    histories.set(row.deviceId, history);
  }
  const deviceIds = [...new Set(uses.map((use) => use.deviceId))];
  const useAt = (deviceId: string, head: number, atMs: number) =>
    uses.find((use) => use.deviceId === deviceId && use.head === head && use.fromMs <= atMs && (use.toMs === null || atMs < use.toMs));

  function all(fromMs: number, toMs: number): SystemSlot[] {
    return deviceIds
      .flatMap((deviceId) =>
        scheduledSlots(histories.get(deviceId) ?? [], fromMs, toMs).flatMap((slot) => {
          const use = useAt(deviceId, slot.head, slot.dueMs);
          return use === undefined ? [] : [{ ...slot, deviceId, headId: use.headId }];
        }),
      )
      .sort((one, other) => one.dueMs - other.dueMs);
  }

  const planned = (fromMs: number, toMs: number) => all(fromMs, toMs).filter((slot) => slot.enabled);

  const changesMs = [...versions.map((version) => version.fromMs), ...uses.flatMap((use) => [use.fromMs, use.toMs ?? use.fromMs])];
  const sizesBetween = new Map<string, number[]>();

  /** Windows that hold the same changes have the same sizes: of thousands of window ends few are worked out. */
  function slotSizesMl(fromMs: number, toMs: number): number[] {
    const key = `${changesMs.filter((atMs) => atMs <= fromMs).length} ${changesMs.filter((atMs) => atMs < toMs).length}`;
    const sizes = sizesBetween.get(key) ?? workOutSlotSizesMl(fromMs, toMs);
    sizesBetween.set(key, sizes);
    return sizes;
  }

  /** Slot sizes of the carbon heads in schedules in force at any moment of (`fromMs`, `toMs`]. */
  function workOutSlotSizesMl(fromMs: number, toMs: number): number[] {
    return deviceIds.flatMap((deviceId) => {
      const history = histories.get(deviceId) ?? [];
      return history.flatMap((schedule, index) => {
        const sinceMs = Math.max(fromMs, schedule.fromMs);
        const untilMs = Math.min(toMs, history[index + 1]?.fromMs ?? Number.POSITIVE_INFINITY);
        if (sinceMs >= untilMs) return [];
        return schedule.heads.flatMap((head) => {
          const used = uses.some(
            (use) =>
              use.deviceId === deviceId && use.head === head.head && use.fromMs < untilMs && (use.toMs === null || use.toMs > sinceMs),
          );
          return used && head.enabled && head.slotsUtcMin.length > 0 ? [head.slotMl] : [];
        });
      });
    });
  }

  /** What the schedules in force at a moment plan per day, mL. */
  function mlPerDayAt(atMs: number): number {
    const heads = deviceIds.flatMap((deviceId) => {
      const inForce = histories.get(deviceId)?.findLast((schedule) => schedule.fromMs <= atMs);
      return inForce?.heads.filter((head) => head.enabled && useAt(deviceId, head.head, atMs) !== undefined) ?? [];
    });
    return heads.reduce((sum, head) => sum + head.slotMl * head.slotsUtcMin.length, 0);
  }

  function dailySteps(fromMs: number, toMs: number): DailyStep[] {
    const published = versions.map((version) => version.fromMs);
    const assigned = uses.flatMap((use) => [use.fromMs, use.toMs ?? fromMs]);
    const changesMs = [...published, ...assigned].filter((atMs) => atMs > fromMs && atMs < toMs).sort((one, other) => one - other);
    const steps = [fromMs, ...new Set(changesMs)].map((atMs) => ({ fromMs: atMs, mlPerDay: mlPerDayAt(atMs) }));
    return steps.filter((step, index) => index === 0 || step.mlPerDay !== steps[index - 1]?.mlPerDay);
  }

  return {
    dailySteps,
    plannedSlots: planned,
    scheduledSlots: all,
    plannedMl: (fromMs, toMs) => planned(fromMs, toMs).reduce((sum, slot) => sum + slot.ml, 0),
    largestSlotMl: (fromMs, toMs) => Math.max(0, ...slotSizesMl(fromMs, toMs)),
    isScheduled: (fromMs, toMs) => slotSizesMl(fromMs, toMs).length > 0,
  };
}

/** Loads what was planned in (`fromMs`, `toMs`] inside a unit of work. Ask the answer only within that window. */
export function plannedVolumeIn(tx: Transaction, systemId: string, fromMs: number, toMs: number): PlannedVolume {
  const uses = tx.all(usesOf([systemId], fromMs, toMs));
  const deviceIds = [...new Set(uses.map((use) => use.deviceId))];
  return assemble(uses, deviceIds.length === 0 ? [] : tx.all(versionsOf(deviceIds, fromMs, toMs)));
}

/** Loads what was planned in (`fromMs`, `toMs`]. Ask the answer only within that window. */
export async function readPlannedVolume(reader: Reader, systemId: string, fromMs: number, toMs: number): Promise<PlannedVolume> {
  const volumes = await readPlannedVolumes(reader, [systemId], fromMs, toMs);
  return volumes.get(systemId) ?? assemble([], []);
}

/** The same for many systems at once, by system id: two queries however many they are. */
export async function readPlannedVolumes(
  reader: Reader,
  systemIds: string[],
  fromMs: number,
  toMs: number,
): Promise<Map<string, PlannedVolume>> {
  const { rows: uses } = systemIds.length === 0 ? { rows: [] } : await reader.executeQuery(usesOf(systemIds, fromMs, toMs).compile());
  const deviceIds = [...new Set(uses.map((use) => use.deviceId))];
  const { rows: versions } =
    deviceIds.length === 0 ? { rows: [] } : await reader.executeQuery(versionsOf(deviceIds, fromMs, toMs).compile());
  return new Map(
    systemIds.map((systemId) => {
      const own = uses.filter((use) => use.systemId === systemId);
      const ownDeviceIds = new Set(own.map((use) => use.deviceId));
      return [
        systemId,
        assemble(
          own,
          versions.filter((version) => ownDeviceIds.has(version.deviceId)),
        ),
      ];
    }),
  );
}
