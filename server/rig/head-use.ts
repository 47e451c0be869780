import { query } from '../db/open.ts';
import type { Transaction } from '../db/writer.ts';
import { BadInputError, type FieldError } from '../errors.ts';

/** What a head is used for, as an assignment keeps it. */
export interface HeadUse {
  kind: 'carbon' | 'other';
  productId: string | null;
  reservoirId: string | null;
  mlPerSecond: number;
  smallestMl: number;
}

/** @throws {BadInputError} for a product of another site, or a reservoir of another system. */
export function checkUse(tx: Transaction, place: { siteId: string; systemId: string }, use: HeadUse): void {
  const { productId, reservoirId } = use;
  const errors: FieldError[] = [];
  const product = query.selectFrom('product').where('siteId', '=', place.siteId).select('id');
  if (productId !== null && tx.first(product.where('id', '=', productId)) === undefined) {
    errors.push({ path: 'productId', message: 'This site has no such product' });
  }
  const reservoir = query.selectFrom('reservoir').where('siteId', '=', place.siteId).where('systemId', '=', place.systemId).select('id');
  if (reservoirId !== null && tx.first(reservoir.where('id', '=', reservoirId)) === undefined) {
    errors.push({ path: 'reservoirId', message: 'This system has no such reservoir' });
  }
  if (errors.length > 0) throw new BadInputError(errors);
}
