import type { ChangeTable } from '../db/schema.ts';
import type { Transaction } from '../db/writer.ts';

/** Puts what the live stream will send beside the change itself, in the same transaction. `data` is the REST shape. */
export function recordChange(tx: Transaction, change: { systemId: string; type: ChangeTable['type']; atMs: number; data: unknown }): void {
  tx.prepare('insert into change (systemId, type, atMs, payload) values (?, ?, ?, ?)').run(
    change.systemId,
    change.type,
    change.atMs,
    JSON.stringify(change.data),
  );
}

/** Leaves a mark, in the same transaction as the change, that the alarms of this system must be evaluated again. */
export function markDirty(tx: Transaction, systemId: string, nowMs: number): void {
  tx.prepare('insert into dirtySystem (systemId, sinceMs) values (?, ?) on conflict do nothing').run(systemId, nowMs);
}
