import { query } from '../db/open.ts';
import type { Row } from '../db/schema.ts';
import type { Transaction } from '../db/writer.ts';
import type { HeadUse } from './head-use.ts';
import { runSourceId } from './run-source-id.ts';

export interface RunDelivery {
  siteId: string;
  deviceId: string;
  run: string;
  use: HeadUse;
  /** What the run has given so far, mL. */
  ml: number;
  /** When what is new of it counts. */
  atMs: number;
  receivedMs: number;
}

type LedgerRow = Row<'doseLedger'>;

const isOfUse = (row: LedgerRow, use: HeadUse) =>
  row.systemId === use.systemId && row.headId === use.headId && row.kind === use.kind && row.productRevisionId === use.productRevisionId;

/**
 * Appends to the ledger what is new of a run. Nothing that was written is changed: when it turns out that the run belongs
 * to another use of the head (its beginning was reported late), the rows of the wrong one are reversed and written again.
 */
export function addRunToLedger(tx: Transaction, delivery: RunDelivery): void {
  const { use, receivedMs } = delivery;
  const sourceId = runSourceId(delivery.deviceId, delivery.run);
  const rows = tx.all(
    query.selectFrom('doseLedger').selectAll().where('sourceKind', '=', 'run').where('sourceId', '=', sourceId).orderBy('step'),
  );
  let step = rows.length;

  function append(countsAs: Omit<HeadUse, 'oxygenDemandMgPerMl'>, atMs: number, deltaMl: number, oxygenDemandMg: number | null): void {
    const { systemId, headId, kind, productRevisionId } = countsAs;
    tx.run(
      query.insertInto('doseLedger').values({
        siteId: delivery.siteId,
        systemId,
        sourceKind: 'run',
        sourceId,
        step: step++,
        headId,
        kind,
        productRevisionId,
        atMs,
        deltaMl,
        oxygenDemandMg,
        receivedMs,
      }),
    );
  }
  const demandMg = (ml: number) => (use.oxygenDemandMgPerMl === null ? null : ml * use.oxygenDemandMgPerMl);

  const netByMoment = new Map<string, LedgerRow>();
  for (const row of rows.filter((candidate) => !isOfUse(candidate, use))) {
    const key = [row.systemId, row.headId, row.kind, row.productRevisionId, row.atMs].join(' ');
    const before = netByMoment.get(key);
    const oxygenDemandMg = row.oxygenDemandMg === null ? null : row.oxygenDemandMg + (before?.oxygenDemandMg ?? 0);
    netByMoment.set(key, { ...row, deltaMl: row.deltaMl + (before?.deltaMl ?? 0), oxygenDemandMg });
  }
  for (const row of netByMoment.values()) {
    if (row.deltaMl === 0) continue;
    append(row, row.atMs, -row.deltaMl, row.oxygenDemandMg === null ? null : -row.oxygenDemandMg);
    append(use, row.atMs, row.deltaMl, demandMg(row.deltaMl));
  }

  const countedMl = rows.reduce((sum, row) => sum + row.deltaMl, 0);
  const newMl = delivery.ml - countedMl;
  // Sums of many small steps differ from their total in the last digits; that is no delivery.
  if (newMl > 1e-9) append(use, delivery.atMs, newMl, demandMg(newMl));
}
