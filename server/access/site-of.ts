import { sql } from 'kysely';
import type { Role } from '#shared/domain/role.ts';
import type { Reader } from '../db/open.ts';

/** Path parameters that name something of a site, and the table that tells which site. */
const tables = {
  siteId: 'site',
  systemId: 'system',
  deviceId: 'device',
  headId: 'head',
  reservoirId: 'reservoir',
  seriesId: 'series',
  testId: 'test',
  alarmId: 'alarm',
} as const;

export type SiteParameter = keyof typeof tables;

export function isSiteParameter(name: string): name is SiteParameter {
  return Object.hasOwn(tables, name);
}

/** The site that a thing belongs to and the person's role there; null when it does not exist or the person is not in its site. */
export async function siteOf(
  reader: Reader,
  userId: string,
  parameter: SiteParameter,
  id: string,
): Promise<{ id: string; role: Role } | null> {
  const table = tables[parameter];
  const siteColumn = sql.ref(parameter === 'siteId' ? 'thing.id' : 'thing.siteId');
  const { rows } = await sql<{ id: string; role: Role }>`
    select membership.siteId as id, membership.role as role from ${sql.table(table)} as thing
    join membership on membership.siteId = ${siteColumn} and membership.userId = ${userId}
    where thing.id = ${id}`.execute(reader);
  return rows[0] ?? null;
}
