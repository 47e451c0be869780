import { netVolumeLitres } from '#shared/domain/net-volume.ts';
import { query } from '../db/open.ts';
import type { Transaction } from '../db/writer.ts';
import { productCeilingMlPerDay } from '../products/product-ceiling.ts';

/**
 * The most that a system should get in a day, mL: the label dose of what its carbon heads give (of several products the
 * lowest), or the owner's written override where that is more; null when nothing tells.
 */
export function carbonCeilingMlPerDay(tx: Transaction, systemId: string): number | null {
  const system = tx.first(
    query.selectFrom('system').select(['displayLitres', 'sumpLitres', 'displacementLitres']).where('id', '=', systemId),
  );
  const netLitres = system === undefined ? null : netVolumeLitres(system);
  if (netLitres === null) return null;
  const heads = tx.all(
    query
      .selectFrom('headAssignment')
      .select(['headId', 'productId'])
      .where('systemId', '=', systemId)
      .where('kind', '=', 'carbon')
      .where('toMs', 'is', null),
  );
  const ceilings = [...new Set(heads.map((head) => head.productId))].flatMap((productId) => {
    const ceilingMl = productId === null ? null : productCeilingMlPerDay(tx, productId, netLitres);
    return ceilingMl === null ? [] : [ceilingMl];
  });
  if (ceilings.length === 0) return null;
  return Math.max(
    Math.min(...ceilings),
    overriddenMlPerDay(
      tx,
      heads.map((head) => head.headId),
    ),
  );
}

/** What the heads give in a day where an owner wrote down why it may be more than the label says; else 0. */
function overriddenMlPerDay(tx: Transaction, headIds: string[]): number {
  if (headIds.length === 0) return 0;
  const schedules = tx.all(
    query.selectFrom('headSchedule').select(['mlPerDay', 'overrideReason']).where('headId', 'in', headIds).where('toMs', 'is', null),
  );
  if (schedules.every((schedule) => schedule.overrideReason === null)) return 0;
  return schedules.reduce((sum, schedule) => sum + schedule.mlPerDay, 0);
}
