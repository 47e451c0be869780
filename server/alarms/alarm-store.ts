import type { AlarmEvent, AlarmState } from '#shared/domain/alarm-life-cycle.ts';
import type { Alarm } from '#shared/contract/alarms.ts';
import { type Actor, recordAudit } from '../audit/record-audit.ts';
import { recordChange } from '../changes/record-change.ts';
import { query } from '../db/open.ts';
import type { NewRow } from '../db/schema.ts';
import type { Transaction } from '../db/writer.ts';
import { type AlarmRow, stateOf } from './alarm-row.ts';
import { presentAlarm } from './present-alarm.ts';

/** What happened to an alarm; `record` is for a window that was over before its data came, `take` changes no state. */
export type AlarmAction = AlarmEvent | 'take' | 'record';

export interface Happening {
  action: AlarmAction;
  actor: Actor;
  nowMs: number;
  reason?: string;
}

export function alarmById(tx: Transaction, alarmId: string): AlarmRow | undefined {
  return tx.first(query.selectFrom('alarm').selectAll().where('id', '=', alarmId));
}

export function openAlarms(tx: Transaction, systemId: string): AlarmRow[] {
  return tx.all(query.selectFrom('alarm').selectAll().where('systemId', '=', systemId).where('closedAtMs', 'is', null));
}

/** The newest ledger entry that ever tripped this limit by this cause, and whether it ever did. */
export function lastTripSeq(tx: Transaction, key: Pick<AlarmRow, 'systemId' | 'code' | 'target' | 'limitKind' | 'tripKey'>): number | null {
  const last = tx.first(
    query
      .selectFrom('alarm')
      .select((select) => select.fn.max('tripSeq').as('tripSeq'))
      .where('systemId', '=', key.systemId)
      .where('code', '=', key.code)
      .where('target', '=', key.target)
      .where('limitKind', '=', key.limitKind)
      .where('tripKey', '=', key.tripKey),
  );
  return last?.tripSeq ?? null;
}

/** Writes a new occurrence with its first transition, and tells the browsers and the audit trail. */
export function insertAlarm(tx: Transaction, row: NewRow<'alarm'> & AlarmRow, happening: Happening): void {
  tx.run(query.insertInto('alarm').values(row));
  record(tx, 'normal', row, happening);
}

/** Changes an occurrence; what happened to it goes into its log and the audit trail. */
export function updateAlarm(tx: Transaction, before: AlarmRow, changes: Partial<AlarmRow>, happening: Happening): AlarmRow {
  const after = { ...before, ...changes };
  tx.run(query.updateTable('alarm').set(changes).where('id', '=', before.id));
  record(tx, stateOf(before), after, happening);
  return after;
}

/** A worse value of an alarm that stands: for the browsers, but no event in its log. */
export function updateMeasure(
  tx: Transaction,
  before: AlarmRow,
  measure: Pick<AlarmRow, 'value' | 'limitValue' | 'evidence' | 'tripSeq'>,
  nowMs: number,
): void {
  const after = { ...before, ...measure };
  tx.run(query.updateTable('alarm').set(measure).where('id', '=', before.id));
  recordChange(tx, { systemId: after.systemId, type: 'alarm', atMs: nowMs, data: presentedIn(tx, after) });
}

export function presentedIn(tx: Transaction, row: AlarmRow): Alarm {
  const { takenBy } = row;
  const person = takenBy === null ? undefined : tx.first(query.selectFrom('user').select('name').where('id', '=', takenBy));
  return presentAlarm(row, person?.name ?? null);
}

function record(tx: Transaction, stateBefore: AlarmState, after: AlarmRow, { action, actor, nowMs, reason }: Happening): void {
  const stateAfter = stateOf(after);
  tx.run(
    query.insertInto('alarmTransition').values({
      alarmId: after.id,
      siteId: after.siteId,
      atMs: nowMs,
      action,
      stateBefore,
      stateAfter,
      actorKind: actor.kind,
      actorId: actor.id,
      reason: reason ?? null,
    }),
  );
  recordChange(tx, { systemId: after.systemId, type: 'alarm', atMs: nowMs, data: presentedIn(tx, after) });
  recordAudit(tx, {
    atMs: nowMs,
    siteId: after.siteId,
    actor,
    action,
    entity: 'alarm',
    entityId: after.id,
    before: { state: stateBefore },
    after: { state: stateAfter, code: after.code, limitKind: after.limitKind, reason: reason ?? null },
  });
}
