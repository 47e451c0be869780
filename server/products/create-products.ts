import { uuidv7 } from 'uuidv7';
import type { BodyOf } from '#shared/contract/endpoint.ts';
import type { Product, productEndpoints } from '#shared/contract/products.ts';
import { partProblem, productStrength } from '#shared/domain/product-strength.ts';
import { recordAudit } from '../audit/record-audit.ts';
import type { Core } from '../core.ts';
import { query } from '../db/open.ts';
import { readRows } from '../db/read-rows.ts';
import { BadInputError, type FieldError } from '../errors.ts';
import { claimId } from '../requests/claim-id.ts';
import type { Made } from '../requests/made.ts';
import { productOf, productRows } from './product-rows.ts';

type CreateBody = BodyOf<typeof productEndpoints.createProduct>;

export interface Products {
  list(siteId: string): Promise<Product[]>;
  create(input: { siteId: string; userId: string; body: CreateBody }): Promise<Made<Product>>;
}

const partMessages = {
  'solid-by-volume': 'Give a solid in grams per litre, not in % by volume',
  'denser-than-pure': 'A litre of the pure substance weighs less than this',
};

function checkComposition(composition: CreateBody['composition']): void {
  const errors = composition.flatMap((part, index): FieldError[] => {
    const problem = partProblem(part);
    const field = 'percentByVolume' in part ? 'percentByVolume' : 'gramsPerLitre';
    return problem === null ? [] : [{ path: `composition.${index}.${field}`, message: partMessages[problem] }];
  });
  if (errors.length > 0) throw new BadInputError(errors);
}

export function createProducts(core: Core): Products {
  async function list(siteId: string): Promise<Product[]> {
    const rows = await readRows(core.reader, productRows(siteId).orderBy('product.createdAtMs', 'desc').orderBy('product.id', 'desc'));
    return rows.map(productOf);
  }

  return {
    list,

    async create({ siteId, userId, body }) {
      const { id: givenId, ...fields } = body;
      checkComposition(fields.composition);
      const strength = productStrength(fields.composition);
      return core.writer.commit((tx) => {
        const nowMs = core.clock.nowMs();
        const { id, isRepeated } = claimId(tx, { siteId, kind: 'product', id: givenId, body: fields, nowMs });
        if (!isRepeated) {
          tx.run(query.insertInto('product').values({ id, siteId, name: fields.name, form: fields.form, createdAtMs: nowMs }));
          tx.run(
            query.insertInto('productRevision').values({
              id: uuidv7(),
              productId: id,
              siteId,
              composition: JSON.stringify(fields.composition),
              labelMl: fields.label?.ml ?? null,
              labelMaxMl: fields.label?.maxMl ?? null,
              labelPerLitres: fields.label?.perLitres ?? null,
              labelPerDays: fields.label?.perDays ?? null,
              oxygenDemandMgPerMl: strength?.oxygenDemandMgPerMl ?? null,
              carbonMgPerMl: strength?.carbonMgPerMl ?? null,
              fromMs: nowMs,
              actorId: userId,
            }),
          );
          recordAudit(tx, {
            atMs: nowMs,
            siteId,
            actor: { kind: 'user', id: userId },
            action: 'create',
            entity: 'product',
            entityId: id,
            after: fields,
          });
        }
        const row = tx.first(productRows(siteId).where('product.id', '=', id));
        if (row === undefined) throw new Error(`Product ${id} was claimed and is not there`);
        return { value: productOf(row), isRepeated };
      });
    },
  };
}
