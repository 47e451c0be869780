import type SqliteConnection from 'better-sqlite3';
import { Kysely, Migrator, type Migration, SqliteAdapter, SqliteDialect } from 'kysely';
import * as init from './migrations/001-init.ts';

/** Forward only: a migration that has shipped never changes, and none has a `down`. */
export const migrations: Record<string, Migration> = {
  '001-init': init,
};

/** SQLite rolls changes of the schema back with the rest of a transaction; Kysely's adapter holds that it does not. */
class TransactionalAdapter extends SqliteAdapter {
  override get supportsTransactionalDdl(): boolean {
    return true;
  }
}

class TransactionalDialect extends SqliteDialect {
  override createAdapter(): SqliteAdapter {
    return new TransactionalAdapter();
  }
}

/**
 * Brings the schema up to the newest migration, or only as far as `target`.
 * @param known the migrations by name, in order; another map only where a test proves what this does with a next one.
 * @throws the failing migration's own error; everything is then as it was before the call.
 */
export async function migrate(connection: SqliteConnection.Database, target?: string, known = migrations): Promise<void> {
  const db = new Kysely<unknown>({ dialect: new TransactionalDialect({ database: connection }) });
  const migrator = new Migrator({ db, provider: { getMigrations: () => Promise.resolve(known) } });
  const { error } = target === undefined ? await migrator.migrateToLatest() : await migrator.migrateTo(target);
  if (error !== undefined) throw error;
}
