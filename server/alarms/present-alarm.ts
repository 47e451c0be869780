import type { Alarm } from '#shared/contract/alarms.ts';
import { alarmCodeSchema } from '#shared/contract/alarms.ts';
import { type AlarmRow, evidenceOf, stateOf } from './alarm-row.ts';

const iso = (ms: number) => new Date(ms).toISOString();

/** An alarm as the API and the live stream show it. @param takenByName of the person who is on it, when somebody is. */
export function presentAlarm(row: AlarmRow, takenByName: string | null): Alarm {
  return {
    id: row.id,
    code: alarmCodeSchema.parse(row.code),
    siteId: row.siteId,
    systemId: row.systemId,
    target: row.target,
    limitKind: row.limitKind,
    priority: row.priority,
    state: stateOf(row),
    active: row.active === 1,
    acknowledged: row.acknowledged === 1,
    latched: row.latched === 1,
    shelvedUntil: row.shelvedUntilMs === null ? null : iso(row.shelvedUntilMs),
    raisedAt: iso(row.raisedAtMs),
    returnedAt: row.returnedAtMs === null ? null : iso(row.returnedAtMs),
    value: row.value,
    limit: row.limitValue,
    unit: row.unit,
    evidence: evidenceOf(row),
    taken:
      row.takenBy === null || row.arriveAtMs === null
        ? null
        : { userId: row.takenBy, name: takenByName ?? '', arriveAt: iso(row.arriveAtMs) },
  };
}
