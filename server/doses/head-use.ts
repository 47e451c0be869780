import { query } from '../db/open.ts';
import type { Transaction } from '../db/writer.ts';

/** What a head's deliveries count as. */
export interface HeadUse {
  systemId: string;
  headId: string | null;
  kind: 'carbon' | 'other';
  productRevisionId: string | null;
  /** Null when the product, or its composition, is unknown. */
  oxygenDemandMgPerMl: number | null;
}

const revisionsOf = (productId: string) =>
  query.selectFrom('productRevision').select(['id', 'oxygenDemandMgPerMl']).where('productId', '=', productId);

/** The revision in force at that time; before the first one, the first: the product was written down after it was used. */
function revisionAt(tx: Transaction, productId: string, atMs: number) {
  return (
    tx.first(revisionsOf(productId).where('fromMs', '<=', atMs).orderBy('fromMs', 'desc').orderBy('id', 'desc').limit(1)) ??
    tx.first(revisionsOf(productId).orderBy('fromMs').orderBy('id').limit(1))
  );
}

/**
 * What a head was used for at a time. One that nobody registered, or that had no use then, counts for the device's own
 * system as carbon of unknown strength: what nobody vouches for is taken for the dangerous thing.
 */
export function headUseAt(tx: Transaction, device: { id: string; systemId: string }, head: number, atMs: number): HeadUse {
  const found = tx.first(
    query
      .selectFrom('head')
      .leftJoin('headAssignment as use', (join) =>
        join
          .onRef('use.headId', '=', 'head.id')
          .on('use.fromMs', '<=', atMs)
          .on((on) => on.or([on('use.toMs', 'is', null), on('use.toMs', '>', atMs)])),
      )
      .where('head.deviceId', '=', device.id)
      .where('head.head', '=', head)
      .select(['head.id as headId', 'use.systemId', 'use.kind', 'use.productId'])
      .orderBy('use.fromMs', 'desc')
      .limit(1),
  );
  if (found === undefined || found.systemId === null || found.kind === null) {
    return { systemId: device.systemId, headId: found?.headId ?? null, kind: 'carbon', productRevisionId: null, oxygenDemandMgPerMl: null };
  }
  const revision = found.productId === null ? undefined : revisionAt(tx, found.productId, atMs);
  return {
    systemId: found.systemId,
    headId: found.headId,
    kind: found.kind,
    productRevisionId: revision?.id ?? null,
    oxygenDemandMgPerMl: revision?.oxygenDemandMgPerMl ?? null,
  };
}
