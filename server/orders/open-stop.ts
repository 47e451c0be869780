import { query } from '../db/open.ts';
import type { Row } from '../db/schema.ts';
import type { Transaction } from '../db/writer.ts';

/** The stop that keeps a head stopped; undefined when none does. */
export function openStop(tx: Transaction, deviceId: string, head: number): Row<'headStop'> | undefined {
  return tx.first(
    query.selectFrom('headStop').selectAll().where('deviceId', '=', deviceId).where('head', '=', head).where('resumedAtMs', 'is', null),
  );
}
