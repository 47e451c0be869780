import type { DelayPending } from '#shared/domain/alarm-delay.ts';
import { query } from '../db/open.ts';
import type { Row } from '../db/schema.ts';
import type { Transaction } from '../db/writer.ts';

export type PendingRow = Row<'alarmPending'>;
type PendingKey = Pick<PendingRow, 'systemId' | 'code' | 'target' | 'limitKind'>;

export function loadPending(tx: Transaction, systemId: string): PendingRow[] {
  return tx.all(query.selectFrom('alarmPending').selectAll().where('systemId', '=', systemId));
}

/** Keeps, replaces or forgets a delay that runs; writes only what differs. */
export function savePending(
  tx: Transaction,
  { systemId, code, target, limitKind }: PendingKey,
  before: DelayPending | null,
  after: DelayPending | null,
): void {
  if (before?.edge === after?.edge && before?.sinceMs === after?.sinceMs) return;
  if (after === null) {
    tx.run(
      query
        .deleteFrom('alarmPending')
        .where('systemId', '=', systemId)
        .where('code', '=', code)
        .where('target', '=', target)
        .where('limitKind', '=', limitKind),
    );
    return;
  }
  const { edge, sinceMs } = after;
  tx.run(
    query
      .insertInto('alarmPending')
      .values({ systemId, code, target, limitKind, edge, sinceMs })
      .onConflict((conflict) => conflict.columns(['systemId', 'code', 'target', 'limitKind']).doUpdateSet({ edge, sinceMs })),
  );
}
