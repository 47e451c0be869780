import { sql } from 'kysely';
import type { DoseColumns } from '#shared/contract/telemetry.ts';
import type { Reader } from '../db/open.ts';
import { bucketWidthMs, createBuckets } from './dose-buckets.ts';
import { readPlannedVolume } from './planned-volume.ts';

export interface DoseRange {
  systemId: string;
  timeZone: string;
  /** Inclusive. */
  fromMs: number;
  /** Exclusive. */
  toMs: number;
  points: number;
}

/** Carbon by bucket from the ledger, hand apart from pump; buckets in which nothing was given are left out. */
export async function readDoses(reader: Reader, { systemId, timeZone, fromMs, toMs, points }: DoseRange): Promise<DoseColumns> {
  const [quarters, planned] = await Promise.all([
    // The divisor is a literal: bound as a parameter it would be a float, and every row a group of its own.
    reader
      .selectFrom('doseLedger')
      .select((select) => [
        sql<number>`atMs / 900000 * 900000`.as('quarterMs'),
        select.fn.sum<number>(sql`case when sourceKind = 'run' then deltaMl else 0 end`).as('pumpMl'),
        select.fn.sum<number>(sql`case when sourceKind = 'hand' then deltaMl else 0 end`).as('handMl'),
      ])
      .where('systemId', '=', systemId)
      .where('kind', '=', 'carbon')
      .where('atMs', '>=', fromMs)
      .where('atMs', '<', toMs)
      .groupBy('quarterMs')
      .orderBy('quarterMs')
      .execute(),
    readPlannedVolume(reader, systemId, fromMs, toMs),
  ]);

  const resolutionMs = bucketWidthMs(toMs - fromMs, points);
  const bucketOf = createBuckets(timeZone, fromMs, resolutionMs);
  const columns: DoseColumns = {
    resolutionMs,
    t: [],
    pumpMl: [],
    handMl: [],
    planned: planned.dailySteps(fromMs, toMs).map((step) => ({ fromT: step.fromMs, mlPerDay: step.mlPerDay })),
  };
  for (const { quarterMs, pumpMl, handMl } of quarters) {
    const t = bucketOf(quarterMs);
    const last = columns.t.length - 1;
    if (columns.t[last] === t) {
      columns.pumpMl[last] = (columns.pumpMl[last] ?? 0) + pumpMl;
      columns.handMl[last] = (columns.handMl[last] ?? 0) + handMl;
    } else {
      columns.t.push(t);
      columns.pumpMl.push(pumpMl);
      columns.handMl.push(handMl);
    }
  }
  return columns;
}
