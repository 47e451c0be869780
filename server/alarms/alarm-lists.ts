import { type ExpressionBuilder, sql } from 'kysely';
import type { z } from 'zod';
import type { Alarm, alarmTransitionSchema } from '#shared/contract/alarms.ts';
import type { AlarmState } from '#shared/domain/alarm-life-cycle.ts';
import { alarmStateSchema } from '#shared/contract/alarms.ts';
import type { Reader } from '../db/open.ts';
import type { Database } from '../db/schema.ts';
import { comesAfter, type PageRequest } from '../db/seek.ts';
import { NotFoundError } from '../errors.ts';
import type { AlarmRow } from './alarm-row.ts';
import { presentAlarm } from './present-alarm.ts';

export type ListedAlarm = AlarmRow & { takenByName: string | null };
type AlarmTransition = z.infer<typeof alarmTransitionSchema>;

/** Whose alarms: those of a system, or those of all sites that a person is in. */
export type AlarmScope = { systemId: string } | { userId: string };

/** What each state means in rows; those that no rule of this version reaches match none. */
const conditions: Record<AlarmState, string> = {
  normal: 'alarm."closedAtMs" is not null',
  shelved: 'alarm."closedAtMs" is null and alarm."shelvedUntilMs" is not null',
  unacknowledged: 'alarm."closedAtMs" is null and alarm."shelvedUntilMs" is null and alarm.active = 1 and alarm.acknowledged = 0',
  acknowledged: 'alarm."closedAtMs" is null and alarm."shelvedUntilMs" is null and alarm.active = 1 and alarm.acknowledged = 1',
  returned: 'alarm."closedAtMs" is null and alarm."shelvedUntilMs" is null and alarm.active = 0 and alarm.acknowledged = 0',
  latched: 'alarm."closedAtMs" is null and alarm."shelvedUntilMs" is null and alarm.active = 0 and alarm.acknowledged = 1',
  suppressed: 'false',
  'out-of-service': 'false',
};

/** Newest first; all but `normal` when no state is asked for. */
export function listAlarms(reader: Reader, scope: AlarmScope, state: AlarmState | undefined, page: PageRequest): Promise<ListedAlarm[]> {
  let rows = reader
    .selectFrom('alarm')
    .leftJoin('user', 'user.id', 'alarm.takenBy')
    .selectAll('alarm')
    .select('user.name as takenByName')
    .where((where) => inScope(where, scope))
    .where(sql.raw<boolean>(state === undefined ? 'alarm."closedAtMs" is null' : conditions[state]))
    .orderBy('alarm.raisedAtMs', 'desc')
    .orderBy('alarm.id', 'desc')
    .limit(page.limit);
  if (page.after !== null) rows = rows.where(comesAfter('alarm.raisedAtMs', 'alarm.id', page.after));
  return rows.execute();
}

function inScope(where: ExpressionBuilder<Database, 'alarm'>, scope: AlarmScope) {
  if ('systemId' in scope) return where('alarm.systemId', '=', scope.systemId);
  return where(
    'alarm.siteId',
    'in',
    where.selectFrom('membership').select('membership.siteId').where('membership.userId', '=', scope.userId),
  );
}

/** @throws {NotFoundError} */
export async function getAlarm(reader: Reader, alarmId: string): Promise<{ alarm: Alarm; transitions: AlarmTransition[] }> {
  const row = await reader
    .selectFrom('alarm')
    .leftJoin('user', 'user.id', 'alarm.takenBy')
    .selectAll('alarm')
    .select('user.name as takenByName')
    .where('alarm.id', '=', alarmId)
    .executeTakeFirst();
  if (row === undefined) throw new NotFoundError('There is no such alarm');
  const transitions = await reader
    .selectFrom('alarmTransition')
    .leftJoin('user', 'user.id', 'alarmTransition.actorId')
    .selectAll('alarmTransition')
    .select('user.name as actorName')
    .where('alarmId', '=', alarmId)
    .orderBy('seq', 'desc')
    .execute();
  return {
    alarm: presentAlarm(row, row.takenByName),
    transitions: transitions.map(({ seq, atMs, action, stateBefore, stateAfter, actorKind, actorName, reason }) => ({
      seq,
      at: new Date(atMs).toISOString(),
      action,
      stateBefore: alarmStateSchema.parse(stateBefore),
      stateAfter: alarmStateSchema.parse(stateAfter),
      actorKind,
      actorName,
      reason,
    })),
  };
}
