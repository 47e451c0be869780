import { sql } from 'kysely';
import type { Reader } from '../db/open.ts';

/** Sites of the systems that a person may see, by system; those that they may not see, or that do not exist, are left out. */
export async function sitesOfVisibleSystems(reader: Reader, userId: string, systemIds: string[]): Promise<Map<string, string>> {
  // One bound value however many systems there are.
  const wanted = sql<string>`(select value from json_each(${JSON.stringify(systemIds)}))`;
  const rows = await reader
    .selectFrom('system')
    .innerJoin('membership', 'membership.siteId', 'system.siteId')
    .select(['system.id', 'system.siteId'])
    .where('membership.userId', '=', userId)
    .where('system.id', 'in', wanted)
    .execute();
  return new Map(rows.map((row) => [row.id, row.siteId]));
}

export async function isSessionOpen(reader: Reader, sessionId: string, nowMs: number): Promise<boolean> {
  const session = await reader
    .selectFrom('session')
    .select('id')
    .where('id', '=', sessionId)
    .where('revokedAtMs', 'is', null)
    .where('expiresAtMs', '>', nowMs)
    .executeTakeFirst();
  return session !== undefined;
}
