import { chmodSync, closeSync, existsSync, openSync } from 'node:fs';
import SqliteConnection from 'better-sqlite3';
import { DummyDriver, Kysely, SqliteAdapter, SqliteDialect, SqliteIntrospector, SqliteQueryCompiler } from 'kysely';
import type { Database } from './schema.ts';

/** Read-only Kysely over a connection of its own. Writes go through {@link ./writer.ts}. */
export type Reader = Kysely<Database>;

/** Builds queries that a unit of work runs synchronously; it has no connection and cannot execute by itself. */
export const query = new Kysely<Database>({
  dialect: {
    createAdapter: () => new SqliteAdapter(),
    createDriver: () => new DummyDriver(),
    createIntrospector: (db) => new SqliteIntrospector(db),
    createQueryCompiler: () => new SqliteQueryCompiler(),
  },
});

const PRIVATE = 0o600;

/**
 * Opens the one writing connection: WAL, and `synchronous=FULL` set after it, since WAL alone falls back to NORMAL,
 * under which a committed transaction can vanish with the power.
 */
export function openWritingConnection(file: string): SqliteConnection.Database {
  keepPrivate(file);
  const connection = new SqliteConnection(file);
  connection.pragma('journal_mode = WAL');
  connection.pragma('synchronous = FULL');
  connection.pragma('foreign_keys = ON');
  return connection;
}

/**
 * Leaves the database to whoever runs the server, whatever the folder allows: it holds password hashes and device secrets.
 * What SQLite puts beside it later takes its mode.
 */
function keepPrivate(file: string): void {
  // Not opened when it is there: closing it again would drop the locks of a connection of this process.
  if (!existsSync(file)) closeSync(openSync(file, 'wx', PRIVATE));
  for (const one of [file, `${file}-wal`, `${file}-shm`]) if (existsSync(one)) chmodSync(one, PRIVATE);
}

/** Opens a connection that cannot write. The file must exist and be in WAL mode already. */
export function openReadingConnection(file: string): SqliteConnection.Database {
  const connection = new SqliteConnection(file, { readonly: true, fileMustExist: true });
  connection.pragma('query_only = ON');
  return connection;
}

export function openReader(file: string): Reader {
  return new Kysely<Database>({ dialect: new SqliteDialect({ database: openReadingConnection(file) }) });
}
