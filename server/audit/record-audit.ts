import { query } from '../db/open.ts';
import type { ActorKind } from '../db/schema.ts';
import type { Transaction } from '../db/writer.ts';

export interface Actor {
  kind: ActorKind;
  id: string;
}

/** The server itself, where no person and no device asked for it. */
export const systemActor: Actor = { kind: 'system', id: 'steadfall' };

export interface AuditEntry {
  atMs: number;
  siteId: string | null;
  actor: Actor;
  /** `create`, `update`, `delete`, or the verb of the product such as `stop`, `reset`. */
  action: string;
  entity: string;
  entityId: string;
  before?: unknown;
  after?: unknown;
}

/** Writes down who did what, in the same transaction as the change. Never give it a secret. */
export function recordAudit(tx: Transaction, entry: AuditEntry): void {
  tx.run(
    query.insertInto('audit').values({
      atMs: entry.atMs,
      siteId: entry.siteId,
      actorKind: entry.actor.kind,
      actorId: entry.actor.id,
      action: entry.action,
      entity: entry.entity,
      entityId: entry.entityId,
      before: entry.before === undefined ? null : JSON.stringify(entry.before),
      after: entry.after === undefined ? null : JSON.stringify(entry.after),
    }),
  );
}
