import SqliteConnection from 'better-sqlite3';
import type { Kysely } from 'kysely';
import { describe, expect, it } from 'vitest';
import { migrate, migrations } from '../../../server/db/migrate.ts';

const names = Object.keys(migrations);

function schemaOf(connection: SqliteConnection.Database): string[] {
  const rows = connection.prepare("select sql from sqlite_schema where sql is not null and name not like 'kysely%' order by name").all();
  return (rows as { sql: string }[]).map((row) => row.sql.replace(/\s+/g, ' '));
}

/** Fills every table of the schema as it stands with one row, types by the declared columns, foreign keys aside. */
function fillEveryTable(connection: SqliteConnection.Database): Map<string, number> {
  const tables = connection
    .prepare("select name from sqlite_schema where type = 'table' and name not like 'sqlite%' and name not like 'kysely%'")
    .pluck()
    .all() as string[];
  connection.pragma('foreign_keys = OFF');
  for (const table of tables) {
    const columns = connection.pragma(`table_info(${table})`) as { name: string; type: string }[];
    const values = columns.map((column) => {
      if (table === 'membership' && column.name === 'role') return 'owner';
      return column.type === 'TEXT' ? `${table}-1` : 1;
    });
    connection.prepare(`insert into ${table} values (${columns.map(() => '?').join(', ')})`).run(...values);
  }
  return new Map(tables.map((table) => [table, 1]));
}

function countRows(connection: SqliteConnection.Database, table: string): number {
  return connection.prepare(`select count(*) from ${table}`).pluck().get() as number;
}

describe('migrations', () => {
  it('are listed in the order of their numbers', () => {
    expect(names).toEqual([...names].sort());
    expect(names.map((name) => Number(name.slice(0, 3)))).toEqual(names.map((_, index) => index + 1));
  });

  it('build the schema from empty, and change nothing when run again', async () => {
    const connection = new SqliteConnection(':memory:');
    await migrate(connection);
    const once = schemaOf(connection);
    await migrate(connection);
    expect(once.length).toBeGreaterThan(40);
    expect(schemaOf(connection)).toEqual(once);
    connection.close();
  });

  it.each(names)('keep every row of a database that stood at %s, and arrive at the same schema', async (name) => {
    const fresh = new SqliteConnection(':memory:');
    await migrate(fresh);
    const old = new SqliteConnection(':memory:');
    await migrate(old, name);
    const counts = fillEveryTable(old);
    await migrate(old);
    for (const [table, count] of counts) expect(countRows(old, table), table).toBe(count);
    expect(schemaOf(old)).toEqual(schemaOf(fresh));
    fresh.close();
    old.close();
  });

  const next = '002-note-on-sites';
  const withNext = {
    ...migrations,
    [next]: { up: (db: Kysely<unknown>) => db.schema.alterTable('site').addColumn('note', 'text').execute() },
  };

  it('keep every row when a next one adds a column, also when it runs again', async () => {
    const connection = new SqliteConnection(':memory:');
    await migrate(connection);
    const counts = fillEveryTable(connection);
    const before = connection.prepare('select * from site').all() as object[];
    await migrate(connection, undefined, withNext);
    await migrate(connection, undefined, withNext);
    for (const [table, count] of counts) expect(countRows(connection, table), table).toBe(count);
    expect(connection.prepare('select * from site').all()).toEqual(before.map((row) => ({ ...row, note: null })));
    connection.close();
  });

  it('leave schema and rows as they were when a next one fails halfway', async () => {
    const connection = new SqliteConnection(':memory:');
    await migrate(connection);
    const counts = fillEveryTable(connection);
    const before = schemaOf(connection);
    const failing = {
      ...migrations,
      [next]: {
        async up(db: Kysely<unknown>) {
          await withNext[next]?.up(db);
          throw new Error('it failed halfway');
        },
      },
    };
    await expect(migrate(connection, undefined, failing)).rejects.toThrow('halfway');
    expect(schemaOf(connection)).toEqual(before);
    for (const [table, count] of counts) expect(countRows(connection, table), table).toBe(count);
    connection.close();
  });
});
