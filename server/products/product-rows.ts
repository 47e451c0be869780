import { z } from 'zod';
import { componentSchema, type Product } from '#shared/contract/products.ts';
import { query } from '../db/open.ts';
import type { Row } from '../db/schema.ts';
import type { Transaction } from '../db/writer.ts';
import { BadInputError } from '../errors.ts';

/** Products of a site, each with its newest revision. */
export function productRows(siteId: string) {
  return query
    .selectFrom('product')
    .innerJoin('productRevision as revision', 'revision.productId', 'product.id')
    .where('product.siteId', '=', siteId)
    .where(({ eb, selectFrom }) =>
      eb(
        'revision.id',
        '=',
        selectFrom('productRevision as newest')
          .select('newest.id')
          .whereRef('newest.productId', '=', 'product.id')
          .orderBy('newest.fromMs', 'desc')
          .orderBy('newest.id', 'desc')
          .limit(1),
      ),
    )
    .select([
      'product.id',
      'product.siteId',
      'product.name',
      'product.form',
      'product.createdAtMs',
      'revision.composition',
      'revision.labelMl',
      'revision.labelMaxMl',
      'revision.labelPerLitres',
      'revision.labelPerDays',
      'revision.oxygenDemandMgPerMl',
      'revision.carbonMgPerMl',
    ]);
}

type ProductRow = Omit<Product, 'composition' | 'label'> &
  Pick<Row<'productRevision'>, 'composition' | 'labelMl' | 'labelMaxMl' | 'labelPerLitres' | 'labelPerDays'>;

const compositionSchema = z.array(componentSchema);

export function productOf(row: ProductRow): Product {
  const { labelMl: ml, labelMaxMl: maxMl, labelPerLitres: perLitres, labelPerDays: perDays } = row;
  return {
    id: row.id,
    siteId: row.siteId,
    name: row.name,
    form: row.form,
    composition: compositionSchema.parse(JSON.parse(row.composition)),
    label: ml === null || perLitres === null || perDays === null ? null : { ml, maxMl, perLitres, perDays },
    oxygenDemandMgPerMl: row.oxygenDemandMgPerMl,
    carbonMgPerMl: row.carbonMgPerMl,
  };
}

/**
 * The revision of a site's product that was in force at a time; before its first revision, that one.
 * @throws {BadInputError} at `productId` when the site has no such product.
 */
export function productRevisionAt(tx: Transaction, input: { siteId: string; productId: string; atMs: number }) {
  const revisions = query
    .selectFrom('productRevision')
    .where('siteId', '=', input.siteId)
    .where('productId', '=', input.productId)
    .select(['id', 'oxygenDemandMgPerMl']);
  const revision =
    tx.first(revisions.where('fromMs', '<=', input.atMs).orderBy('fromMs', 'desc').orderBy('id', 'desc').limit(1)) ??
    tx.first(revisions.orderBy('fromMs').orderBy('id').limit(1));
  if (revision === undefined) throw new BadInputError([{ path: 'productId', message: 'This site has no such product' }]);
  return revision;
}
