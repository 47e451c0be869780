import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { uuidv7 } from 'uuidv7';
import { productEndpoints } from '#shared/contract/products.ts';
import { createProducts, type Products } from '../../../server/products/create-products.ts';
import { productRevisionAt } from '../../../server/products/product-rows.ts';
import { manualClock, openTestCore, type TestCore } from '../../helpers/core.ts';
import { addPlace, addSiteRow, insertRow } from '../../helpers/rows.ts';

const clock = manualClock();
let opened: TestCore;
let products: Products;
let siteId: string;
let userId: string;

beforeEach(async () => {
  opened = await openTestCore(clock);
  products = createProducts(opened.core);
  ({ siteId, userId } = await addPlace(opened.core));
});

afterEach(() => opened.close());

const body = productEndpoints.createProduct.body.parse({
  name: 'Carbon blend A, 40 % ethanol by volume',
  form: 'liquid',
  composition: [{ substance: 'ethanol', percentByVolume: 40 }],
  label: { ml: 2, maxMl: 3, perLitres: 100, perDays: 1 },
});

describe('a product', () => {
  it('has its strength computed from its composition', async () => {
    const { value } = await products.create({ siteId, userId, body });
    expect(value.oxygenDemandMgPerMl).toBeCloseTo(657.82, 1);
    expect(value.carbonMgPerMl).toBeCloseTo(164.61, 1);
    expect(value).toMatchObject({ siteId, ...body });
    expect(await products.list(siteId)).toEqual([value]);
  });

  it.each([
    ['an unnamed part', [{ substance: 'other' as const, percentByVolume: 5 }]],
    ['no composition', []],
  ])('is of unknown strength with %s', async (_, composition) => {
    const { value } = await products.create({ siteId, userId, body: { ...body, composition, label: null } });
    expect(value).toMatchObject({ oxygenDemandMgPerMl: null, carbonMgPerMl: null, label: null, composition });
  });

  it('says which part cannot be', async () => {
    const composition = [
      { substance: 'ethanol' as const, percentByVolume: 10 },
      { substance: 'glucose' as const, percentByVolume: 10 },
      { substance: 'ethanol' as const, gramsPerLitre: 900 },
    ];
    await expect(products.create({ siteId, userId, body: { ...body, composition } })).rejects.toMatchObject({
      errors: [{ path: 'composition.1.percentByVolume' }, { path: 'composition.2.gramsPerLitre' }],
    });
    expect(await products.list(siteId)).toEqual([]);
  });

  it('is made once when the request is repeated, and refused with its id and another body', async () => {
    const id = uuidv7();
    const first = await products.create({ siteId, userId, body: { ...body, id } });
    expect(await products.create({ siteId, userId, body: { ...body, id } })).toEqual({ value: first.value, isRepeated: true });
    await expect(products.create({ siteId, userId, body: { ...body, id, name: 'Blend B' } })).rejects.toMatchObject({ rule: 'id-taken' });
    const otherSite = await addSiteRow(opened.core, 'Quay Road');
    await expect(products.create({ siteId: otherSite, userId, body: { ...body, id } })).rejects.toMatchObject({ rule: 'id-taken' });
    expect(await products.list(otherSite)).toEqual([]);
  });

  it('lists the newest first', async () => {
    await products.create({ siteId, userId, body: { ...body, name: 'First' } });
    clock.advance(1000);
    await products.create({ siteId, userId, body: { ...body, name: 'Second' } });
    expect((await products.list(siteId)).map((product) => product.name)).toEqual(['Second', 'First']);
  });

  it.each([
    [
      'parts of more than 100 %',
      {
        composition: [
          { substance: 'ethanol', percentByVolume: 60 },
          { substance: 'water', percentByVolume: 41 },
        ],
      },
    ],
    ['a label of 0 mL', { label: { ml: 0, perLitres: 100, perDays: 1 } }],
    ['a label whose range is upside down', { label: { ml: 2, maxMl: 1, perLitres: 100, perDays: 1 } }],
    ['an over-long name', { name: 'x'.repeat(81) }],
  ])('is refused by its shape with %s', (_, change) => {
    expect(productEndpoints.createProduct.body.safeParse({ ...body, ...change }).success).toBe(false);
  });
});

describe('the revision of a product', () => {
  it('is the one in force at a time, and before the first that one', async () => {
    const { value } = await products.create({ siteId, userId, body });
    const first = await opened.core.reader.selectFrom('productRevision').selectAll().executeTakeFirstOrThrow();
    const later = { ...first, id: uuidv7(), oxygenDemandMgPerMl: 1, fromMs: first.fromMs + 1000 };
    await insertRow(opened.core, 'productRevision', later);
    const idAt = (atMs: number) => opened.core.writer.commit((tx) => productRevisionAt(tx, { siteId, productId: value.id, atMs }).id);
    expect(await idAt(first.fromMs - 5000)).toBe(first.id);
    expect(await idAt(later.fromMs - 1)).toBe(first.id);
    expect(await idAt(later.fromMs)).toBe(later.id);
    expect((await products.list(siteId)).map((product) => product.oxygenDemandMgPerMl)).toEqual([1]);
  });

  it('is refused for a product of another site', async () => {
    const { value } = await products.create({ siteId, userId, body });
    const otherSite = await addSiteRow(opened.core, 'Quay Road');
    const foreign = opened.core.writer.commit((tx) => productRevisionAt(tx, { siteId: otherSite, productId: value.id, atMs: 0 }));
    await expect(foreign).rejects.toMatchObject({ errors: [{ path: 'productId' }] });
  });
});
