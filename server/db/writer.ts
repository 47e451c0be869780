import type SqliteConnection from 'better-sqlite3';
import type { Compilable } from 'kysely';

/** What a unit of work may do, inside the one transaction that it shares with the other units of its group. */
export interface Transaction {
  all<Result>(statement: Compilable<Result>): Result[];
  first<Result>(statement: Compilable<Result>): Result | undefined;
  /** @returns the number of rows changed and the last row id. */
  run(statement: Compilable<unknown>): SqliteConnection.RunResult;
  /** A prepared statement by its SQL text, kept for reuse: for the hot path only. */
  prepare(sqlText: string): SqliteConnection.Statement;
}

export type UnitOfWork<Result> = (tx: Transaction) => Result;

export interface Writer {
  /**
   * Runs a unit synchronously within a group commit and resolves once the group is on disk.
   * A unit that throws is rolled back alone and rejects alone. A unit must not return a promise.
   */
  commit<Result>(unit: UnitOfWork<Result>): Promise<Result>;
  /** Called after each group commit in which at least one unit succeeded. Returns the unsubscriber. */
  onCommitted(listener: () => void): () => void;
  /** Commits what is queued and refuses the rest. */
  close(): Promise<void>;
}

interface Queued {
  unit: UnitOfWork<unknown>;
  resolve: (value: unknown) => void;
  reject: (reason: unknown) => void;
}

type Outcome = { queued: Queued; ok: true; value: unknown } | { queued: Queued; ok: false; error: unknown };

/** A group is committed when it has run this long, so that one flood cannot hold every other promise back. */
const GROUP_MS = 25;

/** The single writer. Groups size themselves: whatever is queued when the event loop comes round shares one fsync. */
export function createWriter(connection: SqliteConnection.Database): Writer {
  const statements = new Map<string, SqliteConnection.Statement>();
  const listeners = new Set<() => void>();
  let queue: Queued[] = [];
  let scheduled = false;
  let closed = false;

  function prepare(sqlText: string): SqliteConnection.Statement {
    let statement = statements.get(sqlText);
    if (statement === undefined) {
      statement = connection.prepare(sqlText);
      if (statements.size > 2_000) statements.clear();
      statements.set(sqlText, statement);
    }
    return statement;
  }

  const tx: Transaction = {
    all<Result>(statement: Compilable<Result>) {
      const compiled = statement.compile();
      const prepared = prepare(compiled.sql);
      if (!prepared.reader) {
        prepared.run(...compiled.parameters);
        return [];
      }
      return prepared.all(...compiled.parameters) as Result[];
    },
    first<Result>(statement: Compilable<Result>) {
      const compiled = statement.compile();
      return prepare(compiled.sql).get(...compiled.parameters) as Result | undefined;
    },
    run(statement) {
      const compiled = statement.compile();
      return prepare(compiled.sql).run(...compiled.parameters);
    },
    prepare,
  };

  function runUnit(queued: Queued): Outcome {
    connection.exec('savepoint unit');
    try {
      const value = queued.unit(tx);
      if (value instanceof Promise) throw new TypeError('A unit of work must not return a promise');
      connection.exec('release unit');
      return { queued, ok: true, value };
    } catch (error) {
      connection.exec('rollback to unit; release unit');
      return { queued, ok: false, error };
    }
  }

  function flush(): void {
    scheduled = false;
    const startedMs = performance.now();
    const outcomes: Outcome[] = [];
    let taken = 0;
    const group = queue;
    try {
      connection.exec('begin immediate');
      while (taken < group.length && performance.now() - startedMs < GROUP_MS) {
        const queued = group[taken++];
        if (queued !== undefined) outcomes.push(runUnit(queued));
      }
      connection.exec('commit');
    } catch (error) {
      if (connection.inTransaction) connection.exec('rollback');
      queue = group.slice(Math.max(taken, 1));
      for (const queued of group.slice(0, Math.max(taken, 1))) queued.reject(error);
      if (queue.length > 0) schedule();
      return;
    }
    queue = group.slice(taken);
    if (queue.length > 0) schedule();
    for (const outcome of outcomes) {
      if (outcome.ok) outcome.queued.resolve(outcome.value);
      else outcome.queued.reject(outcome.error);
    }
    if (outcomes.some((outcome) => outcome.ok)) for (const listener of listeners) listener();
  }

  function schedule(): void {
    if (scheduled) return;
    scheduled = true;
    setImmediate(flush);
  }

  return {
    commit<Result>(unit: UnitOfWork<Result>) {
      if (closed) return Promise.reject(new Error('The writer is closed'));
      return new Promise<Result>((resolve, reject) => {
        queue.push({ unit, resolve: resolve as (value: unknown) => void, reject });
        schedule();
      });
    },
    onCommitted(listener) {
      listeners.add(listener);
      return () => listeners.delete(listener);
    },
    async close() {
      closed = true;
      while (queue.length > 0) await new Promise((resolve) => setImmediate(resolve));
      listeners.clear();
    },
  };
}
