import { z } from 'zod';
import { query } from '../db/open.ts';
import type { Transaction } from '../db/writer.ts';

const JOB = 'alarms';
const LEASE_MS = 30_000;

/** Since when the server has been watching, and which pumps have been heard again since. Kept in the job's row. */
const watchSchema = z.object({ backMs: z.number(), heardAgainMs: z.record(z.string(), z.number()) });

export interface Watch {
  /** Since when there was no break, ms. */
  backMs: number;
  /** When a pump was first seen to have been heard since then: noted at the first question, ms. */
  heardAgainMs(deviceId: string): number;
}

/** Who evaluates: one process at a time, and since when without a break. */
export interface Lease {
  /** Takes the lease over, whoever holds it: the process that started last is the one that runs. */
  take(tx: Transaction, nowMs: number): void;
  /** Keeps the lease. Null when another process took over. */
  hold(tx: Transaction, nowMs: number): Watch | null;
  release(tx: Transaction, nowMs: number): void;
}

type WatchState = z.infer<typeof watchSchema>;

export function createLease(owner: string): Lease {
  let token = 0;

  function write(tx: Transaction, leaseUntilMs: number, watch: WatchState): void {
    const row = { leaseOwner: owner, leaseUntilMs, fencingToken: token, cursor: JSON.stringify(watch) };
    tx.run(
      query
        .insertInto('job')
        .values({ name: JOB, ...row })
        .onConflict((conflict) => conflict.column('name').doUpdateSet(row)),
    );
  }

  const read = (tx: Transaction) => tx.first(query.selectFrom('job').selectAll().where('name', '=', JOB));

  function mine(tx: Transaction): { leaseUntilMs: number; watch: WatchState } | null {
    const row = read(tx);
    if (row?.cursor == null || row.fencingToken !== token || row.leaseOwner !== owner) return null;
    return { leaseUntilMs: row.leaseUntilMs, watch: watchSchema.parse(JSON.parse(row.cursor)) };
  }

  return {
    take(tx, nowMs) {
      token = (read(tx)?.fencingToken ?? 0) + 1;
      write(tx, nowMs + LEASE_MS, { backMs: nowMs, heardAgainMs: {} });
    },
    hold(tx, nowMs) {
      const held = mine(tx);
      if (held === null) return null;
      // A lease that lapsed means that nobody watched in between: the machine slept, or the process hung.
      const hasLapsed = held.leaseUntilMs <= nowMs;
      const watch = hasLapsed ? { backMs: nowMs, heardAgainMs: {} } : held.watch;
      if (hasLapsed || held.leaseUntilMs - nowMs < LEASE_MS / 2) write(tx, nowMs + LEASE_MS, watch);
      return {
        backMs: watch.backMs,
        heardAgainMs(deviceId) {
          const known = watch.heardAgainMs[deviceId];
          if (known !== undefined) return known;
          watch.heardAgainMs[deviceId] = nowMs;
          write(tx, nowMs + LEASE_MS, watch);
          return nowMs;
        },
      };
    },
    release(tx, nowMs) {
      const held = mine(tx);
      if (held !== null) write(tx, nowMs, held.watch);
    },
  };
}
