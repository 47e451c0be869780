import { z } from 'zod';
import { type AlarmFlags, type AlarmState, alarmState, isOver } from '#shared/domain/alarm-life-cycle.ts';
import type { NewRow, Row } from '../db/schema.ts';

export type AlarmRow = Row<'alarm'>;

const evidenceSchema = z.string().transform((text) => z.record(z.string(), z.unknown()).parse(JSON.parse(text)));

export function evidenceOf(row: AlarmRow): Record<string, unknown> {
  return evidenceSchema.parse(row.evidence);
}

/** Suppression by design and out of service are not stored: no rule of this version has them. */
export function flagsOf(row: AlarmRow): AlarmFlags {
  return {
    active: row.active === 1,
    acknowledged: row.acknowledged === 1,
    latched: row.latched === 1,
    shelved: row.shelvedUntilMs !== null,
    suppressed: false,
    outOfService: false,
  };
}

export const stateOf = (row: AlarmRow): AlarmState => alarmState(flagsOf(row));

/** The columns that follow from the flags. A shelf's end is set by who shelves. */
export function columnsOf(
  flags: AlarmFlags,
  before: Pick<AlarmRow, 'active' | 'returnedAtMs'>,
  nowMs: number,
): Pick<NewRow<'alarm'>, 'active' | 'acknowledged' | 'latched' | 'returnedAtMs' | 'closedAtMs'> {
  const returnedNow = before.active === 1 && !flags.active;
  return {
    active: flags.active ? 1 : 0,
    acknowledged: flags.acknowledged ? 1 : 0,
    latched: flags.latched ? 1 : 0,
    returnedAtMs: flags.active ? null : returnedNow ? nowMs : before.returnedAtMs,
    closedAtMs: isOver(flags) ? nowMs : null,
  };
}
