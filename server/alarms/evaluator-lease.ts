import { query } from '../db/open.ts';
import type { Transaction } from '../db/writer.ts';

const JOB = 'alarms';
const LEASE_MS = 30_000;

/** Who evaluates: one process at a time, and since when without a break. */
export interface Lease {
  /** Takes the lease over, whoever holds it: the process that started last is the one that runs. */
  take(tx: Transaction, nowMs: number): void;
  /** Keeps the lease. @returns since when there was no break, ms; null when another process took over. */
  hold(tx: Transaction, nowMs: number): number | null;
  release(tx: Transaction, nowMs: number): void;
}

export function createLease(owner: string): Lease {
  let token = 0;

  function write(tx: Transaction, fencingToken: number, leaseUntilMs: number, backMs: number): void {
    const row = { leaseOwner: owner, leaseUntilMs, fencingToken, cursor: String(backMs) };
    tx.run(
      query
        .insertInto('job')
        .values({ name: JOB, ...row })
        .onConflict((conflict) => conflict.column('name').doUpdateSet(row)),
    );
  }

  const read = (tx: Transaction) => tx.first(query.selectFrom('job').selectAll().where('name', '=', JOB));

  return {
    take(tx, nowMs) {
      token = (read(tx)?.fencingToken ?? 0) + 1;
      write(tx, token, nowMs + LEASE_MS, nowMs);
    },
    hold(tx, nowMs) {
      const row = read(tx);
      if (row === undefined || row.fencingToken !== token || row.leaseOwner !== owner) return null;
      const backMs = Number(row.cursor);
      // A lease that lapsed means that nobody watched in between: the machine slept, or the process hung.
      if (row.leaseUntilMs <= nowMs) {
        write(tx, token, nowMs + LEASE_MS, nowMs);
        return nowMs;
      }
      if (row.leaseUntilMs - nowMs < LEASE_MS / 2) write(tx, token, nowMs + LEASE_MS, backMs);
      return backMs;
    },
    release(tx, nowMs) {
      const row = read(tx);
      if (row?.fencingToken === token && row.leaseOwner === owner) write(tx, token, nowMs, Number(row.cursor));
    },
  };
}
