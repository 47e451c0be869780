import type { PageRequest } from '../db/seek.ts';
import { comesAfter } from '../db/seek.ts';
import type { Reader } from '../db/open.ts';
import type { Row } from '../db/schema.ts';

export type AuditRow = Row<'audit'> & { actorName: string | null };

/** Who changed what in a site, newest first. */
export async function auditOfSite(reader: Reader, siteId: string, page: PageRequest): Promise<AuditRow[]> {
  let list = reader
    .selectFrom('audit')
    .leftJoin('user', (join) => join.onRef('user.id', '=', 'audit.actorId').on('audit.actorKind', '=', 'user'))
    .leftJoin('device', (join) => join.onRef('device.id', '=', 'audit.actorId').on('audit.actorKind', '=', 'device'))
    .selectAll('audit')
    .select((eb) => eb.fn.coalesce('user.name', 'device.name').as('actorName'))
    .where('audit.siteId', '=', siteId)
    .orderBy('audit.seq', 'desc')
    .limit(page.limit);
  if (page.after !== null) list = list.where('audit.seq', '<', page.after.key);
  return list.execute();
}

/** Mail of a site, newest first. */
export async function outboxOfSite(reader: Reader, siteId: string, page: PageRequest): Promise<Row<'notice'>[]> {
  let list = reader
    .selectFrom('notice')
    .selectAll()
    .where('siteId', '=', siteId)
    .orderBy('createdAtMs', 'desc')
    .orderBy('id', 'desc')
    .limit(page.limit);
  if (page.after !== null) list = list.where(comesAfter('createdAtMs', 'id', page.after));
  return list.execute();
}
