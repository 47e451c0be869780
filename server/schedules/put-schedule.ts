import { uuidv7 } from 'uuidv7';
import type { z } from 'zod';
import type { BodyOf } from '#shared/contract/endpoint.ts';
import type { controlEndpoints, scheduleEntrySchema } from '#shared/contract/control.ts';
import type { Role } from '#shared/domain/role.ts';
import {
  type DayWindow,
  divideOverTimes,
  layOutSlots,
  mostSlots,
  PortionTooSmallError,
  type SlotLayout,
} from '#shared/domain/slot-layout.ts';
import { type Actor, recordAudit } from '../audit/record-audit.ts';
import { markDirty, recordChange } from '../changes/record-change.ts';
import { query } from '../db/open.ts';
import type { Transaction } from '../db/writer.ts';
import { BadInputError, NotFoundError } from '../errors.ts';
import { stopIfLatched } from '../stops/stop-if-latched.ts';
import { checkCeiling } from './check-ceiling.ts';
import { doseWindow } from './dose-window.ts';
import { reviseSchedule } from './revise-schedule.ts';
import { type ScheduledHead, scheduledHeads } from './scheduled-heads.ts';

export type ScheduleBody = BodyOf<(typeof controlEndpoints)['putSchedule']>;
type ScheduleEntry = z.output<typeof scheduleEntrySchema>;

export interface ScheduleChange {
  systemId: string;
  body: ScheduleBody;
  actor: Actor;
  role: Role;
  nowMs: number;
}

const DEFAULT_SLOTS = 12;

/** A portion is set in thousandths of a millilitre, however fine the head may be. */
const FINEST_ML = 0.001;

/** @throws {BadInputError} when the head cannot give portions that small. */
function layOut(entry: ScheduleEntry, index: number, head: ScheduledHead, window: DayWindow): SlotLayout {
  if (entry.mlPerDay === 0) return { slotMl: 0, slotsUtcMin: [] };
  const smallestMl = Math.max(head.smallestMl, FINEST_ML);
  try {
    if (entry.slotsUtcMin === undefined || mostSlots(entry.mlPerDay, smallestMl) === 0) {
      return layOutSlots(entry.mlPerDay, entry.slots ?? DEFAULT_SLOTS, smallestMl, window);
    }
  } catch (error) {
    if (!(error instanceof PortionTooSmallError)) throw error;
    throw new BadInputError([{ path: `heads.${index}.mlPerDay`, message: error.message }]);
  }
  const layout = divideOverTimes(entry.mlPerDay, entry.slotsUtcMin, smallestMl);
  if (layout !== null) return layout;
  const most = mostSlots(entry.mlPerDay, smallestMl);
  const message = `The portions would be under ${smallestMl} mL, the smallest that this head gives accurately: use at most ${most} times`;
  throw new BadInputError([{ path: `heads.${index}.slotsUtcMin`, message }]);
}

/** Finds the head of each entry. @throws {BadInputError} for one that is not of this system, or named twice. */
function pairWithHeads(entries: ScheduleEntry[], heads: ScheduledHead[]): { entry: ScheduleEntry; head: ScheduledHead }[] {
  return entries.map((entry, index) => {
    const head = heads.find((one) => one.headId === entry.headId);
    if (head === undefined) {
      throw new BadInputError([{ path: `heads.${index}.headId`, message: 'This head is not in use on this system' }]);
    }
    if (entries.findIndex((other) => other.headId === entry.headId) !== index) {
      throw new BadInputError([{ path: `heads.${index}.headId`, message: 'Name each head once' }]);
    }
    return { entry, head };
  });
}

/**
 * Sets the doses of heads by hand; the other heads of the system keep theirs. A head that is kept stopped gets its dose,
 * and stays stopped.
 */
export function putSchedule(tx: Transaction, { systemId, body, actor, role, nowMs }: ScheduleChange): void {
  const system = tx.first(
    query
      .selectFrom('system')
      .innerJoin('site', 'site.id', 'system.siteId')
      .select(['system.id', 'system.siteId', 'displayLitres', 'sumpLitres', 'displacementLitres', 'site.timeZone'])
      .where('system.id', '=', systemId),
  );
  if (system === undefined) throw new NotFoundError('There is no such system');
  const heads = scheduledHeads(tx, system);
  const pairs = pairWithHeads(body.heads, heads);
  const window = doseWindow(system.timeZone, nowMs);
  const doses = pairs.map(({ entry, head }, index) => ({ entry, head, layout: layOut(entry, index, head, window) }));

  const asSet = heads.map((head) => ({ ...head, mlPerDay: pairs.find((pair) => pair.head === head)?.entry.mlPerDay ?? head.mlPerDay }));
  const overrideReason = checkCeiling({
    heads: asSet.filter((head) => head.kind === 'carbon'),
    override: body.override,
    confirmUnknownCeiling: body.confirmUnknownCeiling,
    role,
  });

  for (const { entry, head, layout } of doses) {
    tx.run(query.updateTable('headSchedule').set({ toMs: nowMs }).where('headId', '=', head.headId).where('toMs', 'is', null));
    const row = {
      id: uuidv7(),
      siteId: system.siteId,
      headId: head.headId,
      mlPerDay: entry.mlPerDay,
      slotMl: layout.slotMl,
      slotsUtcMin: JSON.stringify(layout.slotsUtcMin),
      overrideReason,
      fromMs: nowMs,
      toMs: null,
      actorId: actor.id,
    };
    tx.run(query.insertInto('headSchedule').values(row));
    recordAudit(tx, {
      atMs: nowMs,
      siteId: system.siteId,
      actor,
      action: 'schedule',
      entity: 'head',
      entityId: head.headId,
      before: { mlPerDay: head.mlPerDay },
      after: { mlPerDay: entry.mlPerDay, ...layout, overrideReason },
    });
  }
  stopIfLatched(tx, { siteId: system.siteId, systemId, nowMs });
  for (const deviceId of new Set(doses.map(({ head }) => head.deviceId))) reviseSchedule(tx, { deviceId, cause: 'set', actor, nowMs });
  recordChange(tx, { systemId, type: 'plan', atMs: nowMs, data: { reason: 'schedule' } });
  markDirty(tx, systemId, nowMs);
}
