import { query } from '../db/open.ts';
import type { Transaction } from '../db/writer.ts';
import { recordAudit } from '../audit/record-audit.ts';

/** Makes a site with its first owner, within the caller's unit. */
export function addSite(tx: Transaction, site: { id: string; name: string; timeZone: string; ownerId: string; nowMs: number }): void {
  const { id, name, timeZone, ownerId, nowMs } = site;
  tx.run(query.insertInto('site').values({ id, name, timeZone, createdAtMs: nowMs }));
  tx.run(query.insertInto('membership').values({ siteId: id, userId: ownerId, role: 'owner', createdAtMs: nowMs }));
  recordAudit(tx, {
    atMs: nowMs,
    siteId: id,
    actor: { kind: 'user', id: ownerId },
    action: 'create',
    entity: 'site',
    entityId: id,
    after: { name, timeZone },
  });
}
