import { doseCeilingMlPerDay } from '#shared/domain/dose-ceiling.ts';
import { query } from '../db/open.ts';
import type { Transaction } from '../db/writer.ts';

/** The most that this water should get of a product in a day, by its newest label or composition, mL; null when neither tells. */
export function productCeilingMlPerDay(tx: Transaction, productId: string, netLitres: number): number | null {
  const revision = tx.first(
    query
      .selectFrom('productRevision')
      .select(['labelMl', 'labelMaxMl', 'labelPerLitres', 'labelPerDays', 'carbonMgPerMl'])
      .where('productId', '=', productId)
      .orderBy('fromMs', 'desc')
      .orderBy('id', 'desc')
      .limit(1),
  );
  if (revision === undefined) return null;
  const { labelMl: ml, labelMaxMl: maxMl, labelPerLitres: perLitres, labelPerDays: perDays, carbonMgPerMl } = revision;
  const label = ml === null || perLitres === null || perDays === null ? null : { ml, maxMl, perLitres, perDays };
  return doseCeilingMlPerDay({ label, carbonMgPerMl, netLitres });
}
