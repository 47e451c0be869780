import { uuidv7 } from 'uuidv7';
import { query } from '../../server/db/open.ts';
import type { Insertable } from 'kysely';
import type { Database } from '../../server/db/schema.ts';
import type { Core } from '../../server/core.ts';
import type { Role } from '#shared/domain/role.ts';

/** Writes a row as it is, for what a test takes for given. */
export async function insertRow<Table extends keyof Database>(core: Core, table: Table, row: Insertable<Database[Table]>): Promise<void> {
  // The writer runs any compiled statement; the row's type was checked by the signature.
  await core.writer.commit((tx) => tx.run(query.insertInto(table).values(row as never)));
}

export async function addPerson(core: Core, name: string, roles: Record<string, Role> = {}): Promise<string> {
  const id = uuidv7();
  const createdAtMs = core.clock.nowMs();
  await insertRow(core, 'user', { id, email: `${id}@people.example`, name, passwordHash: 'none', createdAtMs });
  for (const [siteId, role] of Object.entries(roles)) await insertRow(core, 'membership', { siteId, userId: id, role, createdAtMs });
  return id;
}

export async function addSiteRow(core: Core, name = 'Tern Lane', timeZone = 'UTC'): Promise<string> {
  const id = uuidv7();
  await insertRow(core, 'site', { id, name, timeZone, createdAtMs: core.clock.nowMs() });
  return id;
}

export async function addSystemRow(core: Core, siteId: string, name = 'Front window'): Promise<string> {
  const id = uuidv7();
  const volumes = { displayLitres: 400, sumpLitres: 80, displacementLitres: 60 };
  await insertRow(core, 'system', { id, siteId, name, ...volumes, createdAtMs: core.clock.nowMs() });
  return id;
}

/** A site with a keeper and one system: where most tests begin. */
export async function addPlace(core: Core): Promise<{ siteId: string; systemId: string; userId: string }> {
  const siteId = await addSiteRow(core);
  const userId = await addPerson(core, 'Keeper of Tern Lane', { [siteId]: 'keeper' });
  return { siteId, systemId: await addSystemRow(core, siteId), userId };
}
