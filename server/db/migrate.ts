import type SqliteConnection from 'better-sqlite3';
import { Kysely, Migrator, type Migration, SqliteDialect } from 'kysely';
import * as init from './migrations/001-init.ts';

/** Forward only: a migration that has shipped never changes, and none has a `down`. */
export const migrations: Record<string, Migration> = {
  '001-init': init,
};

/**
 * Brings the schema up to the newest migration, or only as far as `target`.
 * @throws the failing migration's own error; the failed migration is rolled back.
 */
export async function migrate(connection: SqliteConnection.Database, target?: string): Promise<void> {
  const db = new Kysely<unknown>({ dialect: new SqliteDialect({ database: connection }) });
  const migrator = new Migrator({ db, provider: { getMigrations: () => Promise.resolve(migrations) } });
  const { error } = target === undefined ? await migrator.migrateToLatest() : await migrator.migrateTo(target);
  if (error !== undefined) throw error;
}
