import { recordChange } from '../changes/record-change.ts';
import { query } from '../db/open.ts';
import type { Transaction } from '../db/writer.ts';
import { openStop } from './open-stop.ts';

interface HeadWord {
  deviceId: string;
  head: number;
  receivedMs: number;
}

/** The pump has said that a head is stopped. Its first word stays the time, until it says otherwise. */
export function confirmStop(tx: Transaction, word: HeadWord): void {
  write(tx, word, true);
}

/** The pump has said that a head that is to be stopped is not: the stop is to be proved anew. */
export function unconfirmStop(tx: Transaction, word: HeadWord): void {
  write(tx, word, false);
}

function write(tx: Transaction, { deviceId, head, receivedMs }: HeadWord, isStopped: boolean): void {
  const stop = openStop(tx, deviceId, head);
  if (stop === undefined || (stop.confirmedAtMs !== null) === isStopped) return;
  tx.run(
    query
      .updateTable('headStop')
      .set({ confirmedAtMs: isStopped ? receivedMs : null })
      .where('id', '=', stop.id),
  );
  recordChange(tx, { systemId: stop.systemId, type: 'plan', atMs: receivedMs, data: { reason: 'stop' } });
}
