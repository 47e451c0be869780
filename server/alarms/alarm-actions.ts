import type { Alarm } from '#shared/contract/alarms.ts';
import { afterEvent, type AlarmEvent } from '#shared/domain/alarm-life-cycle.ts';
import { longestShelfMs } from '#shared/domain/alarm-rules.ts';
import type { Core } from '../core.ts';
import { query } from '../db/open.ts';
import type { Transaction } from '../db/writer.ts';
import { BadInputError, NotFoundError, RuleError } from '../errors.ts';
import { type AlarmRow, columnsOf, flagsOf } from './alarm-row.ts';
import { alarmById, presentedIn, updateAlarm } from './alarm-store.ts';

/** How far ahead somebody may announce to arrive, and how much a slow phone may lag. */
const LONGEST_WAY_MS = 24 * 3_600_000;
const LAG_MS = 60_000;

export interface AlarmActions {
  acknowledge(alarmId: string, userId: string): Promise<Alarm>;
  take(alarmId: string, userId: string, arriveAtMs: number): Promise<Alarm>;
  shelve(alarmId: string, userId: string, untilMs: number, reason: string): Promise<Alarm>;
  reset(alarmId: string, userId: string, cause: string): Promise<Alarm>;
}

/**
 * What people do to an alarm. Of two who do the same at once the second gets the present state. Each throws
 * {@link NotFoundError} for an alarm that is not there, and {@link RuleError} where the life cycle forbids it.
 */
export function createAlarmActions({ writer, clock }: Core): AlarmActions {
  function act(alarmId: string, change: (tx: Transaction, row: AlarmRow, nowMs: number) => AlarmRow): Promise<Alarm> {
    return writer.commit((tx) => {
      const row = alarmById(tx, alarmId);
      if (row === undefined) throw new NotFoundError('There is no such alarm');
      return presentedIn(tx, change(tx, row, clock.nowMs()));
    });
  }

  return {
    acknowledge: (alarmId, userId) =>
      act(alarmId, (tx, row, nowMs) => (row.acknowledged === 1 ? row : happen(tx, row, 'acknowledge', { userId, nowMs }))),

    take: (alarmId, userId, arriveAtMs) =>
      act(alarmId, (tx, row, nowMs) => {
        mustBeOpen(row);
        if (arriveAtMs < nowMs - LAG_MS) throw new BadInputError([{ path: 'arriveAt', message: 'Give a time from now on' }]);
        if (arriveAtMs > nowMs + LONGEST_WAY_MS) {
          throw new BadInputError([{ path: 'arriveAt', message: 'Give a time within 24 hours, or let somebody nearer take it' }]);
        }
        const isOthers = row.takenBy !== null && row.takenBy !== userId && row.arriveAtMs !== null && row.arriveAtMs > nowMs;
        if (isOthers || (row.takenBy === userId && row.arriveAtMs === arriveAtMs)) return row;
        const happening = { action: 'take', actor: { kind: 'user', id: userId }, nowMs } as const;
        return updateAlarm(tx, row, { takenBy: userId, arriveAtMs }, happening);
      }),

    shelve: (alarmId, userId, untilMs, reason) =>
      act(alarmId, (tx, row, nowMs) => {
        mustBeOpen(row);
        const longestMs = longestShelfMs(row.interlock === 1);
        if (untilMs <= nowMs) throw new BadInputError([{ path: 'until', message: 'Give a time that is still to come' }]);
        if (untilMs > nowMs + longestMs) {
          const most =
            row.interlock === 1
              ? 'An alarm that stops pumps can be shelved for at most 8 hours'
              : 'An alarm can be shelved for at most 7 days';
          throw new BadInputError([{ path: 'until', message: most }]);
        }
        return happen(tx, row, 'shelve', { userId, nowMs, reason }, { shelvedUntilMs: untilMs });
      }),

    reset: (alarmId, userId, cause) =>
      act(alarmId, (tx, row, nowMs) => {
        if (row.interlock === 0) throw new RuleError('nothing-latched', 'This alarm keeps no pump stopped; acknowledge it instead');
        if (row.latched === 0) return row;
        // What is in the ledger now was accounted for: only more volume trips it again.
        const tripSeq = Math.max(row.tripSeq, newestSeq(tx, row.systemId));
        return happen(tx, row, 'reset', { userId, nowMs, reason: cause }, { tripSeq });
      }),
  };
}

function mustBeOpen(row: AlarmRow): void {
  if (row.closedAtMs !== null) throw new RuleError('alarm-over', 'This alarm is over; there is nothing left to do about it');
}

function happen(
  tx: Transaction,
  row: AlarmRow,
  event: AlarmEvent,
  by: { userId: string; nowMs: number; reason?: string },
  changes: Partial<AlarmRow> = {},
): AlarmRow {
  const flags = afterEvent(flagsOf(row), event, row.interlock === 1);
  if (flags === null) throw new RuleError('alarm-over', 'This alarm is over; there is nothing left to do about it');
  const happening = { action: event, actor: { kind: 'user', id: by.userId }, nowMs: by.nowMs, reason: by.reason } as const;
  return updateAlarm(tx, row, { ...columnsOf(flags, row, by.nowMs), ...changes }, happening);
}

function newestSeq(tx: Transaction, systemId: string): number {
  const newest = tx.first(
    query
      .selectFrom('doseLedger')
      .select((select) => select.fn.max('seq').as('seq'))
      .where('systemId', '=', systemId),
  );
  return newest?.seq ?? 0;
}
