import { uuidv7 } from 'uuidv7';
import { query } from '../db/open.ts';
import type { Transaction } from '../db/writer.ts';

export interface Notice {
  /** Names the occasion: what was written for it once is not written again. */
  dedupeKey: string;
  siteId: string | null;
  toAddress: string;
  subject: string;
  body: string;
  nowMs: number;
}

/** Addresses and subjects become header lines of a mail: a line break in one would start a header of its own. */
function oneLine(text: string): string {
  return text.replace(/[\u0000-\u001f\u007f]+/g, ' ').trim();
}

/** Puts a mail into the outbox table. An occasion that was written for already is left as it is. */
export function insertNotice(tx: Transaction, notice: Notice): void {
  tx.run(
    query
      .insertInto('notice')
      .values({
        id: uuidv7(),
        dedupeKey: notice.dedupeKey,
        siteId: notice.siteId,
        toAddress: oneLine(notice.toAddress),
        subject: oneLine(notice.subject),
        body: notice.body,
        state: 'waiting',
        attempts: 0,
        leaseUntilMs: 0,
        createdAtMs: notice.nowMs,
        sentAtMs: null,
      })
      .onConflict((conflict) => conflict.column('dedupeKey').doNothing()),
  );
}
