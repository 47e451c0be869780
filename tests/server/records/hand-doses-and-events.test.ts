import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { uuidv7 } from 'uuidv7';
import { recordEndpoints } from '#shared/contract/records.ts';
import { createProducts } from '../../../server/products/create-products.ts';
import { createEvents, eventOf, type Events } from '../../../server/records/create-events.ts';
import { createHandDoses, handDoseOf, type HandDoses } from '../../../server/records/create-hand-doses.ts';
import { NotFoundError } from '../../../server/errors.ts';
import { manualClock, openTestCore, type TestCore } from '../../helpers/core.ts';
import { addPlace, addSiteRow } from '../../helpers/rows.ts';

const clock = manualClock();
let opened: TestCore;
let handDoses: HandDoses;
let events: Events;
let place: { siteId: string; systemId: string; userId: string };
let productId: string;

beforeEach(async () => {
  opened = await openTestCore(clock);
  handDoses = createHandDoses(opened.core);
  events = createEvents(opened.core);
  place = await addPlace(opened.core);
  productId = await addProduct(place.siteId);
});

afterEach(() => opened.close());

async function addProduct(siteId: string, substance: 'ethanol' | 'other' = 'ethanol'): Promise<string> {
  const body = { name: 'Blend', form: 'liquid' as const, composition: [{ substance, percentByVolume: 40 }], label: null };
  return (await createProducts(opened.core).create({ siteId, userId: place.userId, body })).value.id;
}

const dose = (change: { id?: string; at?: string; ml?: number; productId?: string } = {}) =>
  handDoses.create({ ...place, body: { productId, at: '2026-03-01T10:00:00Z', ml: 2, ...change } });
const ledger = () => opened.core.reader.selectFrom('doseLedger').selectAll().execute();
const dirty = () => opened.core.reader.selectFrom('dirtySystem').select('systemId').execute();

describe('a dose by hand', () => {
  it('counts in the ledger at its own time and in its oxygen demand, and has the alarms looked at', async () => {
    const { value } = await dose();
    expect(value).toMatchObject({ systemId: place.systemId, productId, at: '2026-03-01T10:00:00.000Z', ml: 2, by: 'Keeper of Tern Lane' });
    const [row, ...more] = await ledger();
    expect(more).toEqual([]);
    expect(row).toMatchObject({
      sourceKind: 'hand',
      sourceId: value.id,
      step: 0,
      headId: null,
      kind: 'carbon',
      systemId: place.systemId,
      atMs: Date.parse('2026-03-01T10:00:00Z'),
      deltaMl: 2,
      receivedMs: clock.nowMs(),
    });
    expect(row?.oxygenDemandMg).toBeCloseTo(2 * 657.82, 0);
    expect(await dirty()).toEqual([{ systemId: place.systemId }]);
    const changes = await opened.core.reader.selectFrom('change').select(['type', 'payload']).execute();
    expect(changes).toEqual([{ type: 'plan', payload: '{"reason":"hand-dose"}' }]);
  });

  it('has no oxygen demand when the product does not tell', async () => {
    await dose({ productId: await addProduct(place.siteId, 'other') });
    expect((await ledger())[0]?.oxygenDemandMg).toBeNull();
  });

  it('counts once when the request is repeated', async () => {
    const id = uuidv7();
    const first = await dose({ id });
    expect(await dose({ id })).toEqual({ value: first.value, isRepeated: true });
    await expect(dose({ id, ml: 3 })).rejects.toMatchObject({ rule: 'id-taken' });
    expect(await ledger()).toHaveLength(1);
  });

  it.each<[string, () => Promise<Parameters<typeof dose>[0]>, string]>([
    ["another site's product", async () => ({ productId: await addProduct(await addSiteRow(opened.core, 'Quay Road')) }), 'productId'],
    ['a time in the future', () => Promise.resolve({ at: '2026-03-01T12:10:01Z' }), 'at'],
    ['a time before 1990', () => Promise.resolve({ at: '1985-01-01T00:00:00Z' }), 'at'],
  ])('is refused with %s, and counts nowhere', async (_, change, path) => {
    await expect(dose(await change())).rejects.toMatchObject({ errors: [{ path }] });
    expect(await ledger()).toEqual([]);
    expect(await dirty()).toEqual([]);
  });

  it.each([0, -1, NaN, 100_001])('is refused by its shape with %d mL', (ml) => {
    expect(recordEndpoints.createHandDose.body.safeParse({ productId, at: '2026-03-01T10:00:00Z', ml }).success).toBe(false);
  });

  it('is listed newest first, page by page', async () => {
    for (const hour of ['08', '10', '09']) await dose({ at: `2026-03-01T${hour}:00:00Z` });
    const [newest, ...others] = await handDoses.page(place.systemId, {}, { limit: 1, after: null });
    expect(others).toEqual([]);
    const after = newest === undefined ? null : { key: newest.atMs, id: newest.id };
    const rest = await handDoses.page(place.systemId, {}, { limit: 10, after });
    expect([newest, ...rest].flatMap((row) => (row === undefined ? [] : [handDoseOf(row).at.slice(11, 13)]))).toEqual(['10', '09', '08']);
    const range = { fromMs: Date.parse('2026-03-01T09:00:00Z'), toMs: Date.parse('2026-03-01T10:00:00Z') };
    expect(await handDoses.page(place.systemId, range, { limit: 10, after: null })).toHaveLength(1);
  });
});

describe('an event', () => {
  const event = (change: { id?: string; at?: string; note?: string } = {}) =>
    events.create({ ...place, body: { kind: 'water-change', at: '2026-03-01T10:00:00Z', litres: 40, note: 'all went well', ...change } });

  it('is kept with who wrote it down, and told to the live stream', async () => {
    const { value } = await event();
    expect(value).toMatchObject({ kind: 'water-change', litres: 40, note: 'all went well', by: 'Keeper of Tern Lane' });
    const [row] = await events.page(place.systemId, {}, { limit: 10, after: null });
    expect(row === undefined ? null : eventOf(row)).toEqual(value);
    const changes = await opened.core.reader.selectFrom('change').selectAll().execute();
    expect(changes.map((change) => [change.type, JSON.parse(change.payload) as unknown])).toEqual([['event', value]]);
  });

  it('is kept once when the request is repeated', async () => {
    const id = uuidv7();
    await event({ id });
    expect(await event({ id })).toMatchObject({ isRepeated: true });
    await expect(event({ id, note: 'other' })).rejects.toMatchObject({ rule: 'id-taken' });
    expect(await opened.core.reader.selectFrom('change').selectAll().execute()).toHaveLength(1);
  });

  it('is refused in the future, and for a system of another site', async () => {
    await expect(event({ at: '2026-03-02T12:00:00Z' })).rejects.toMatchObject({ errors: [{ path: 'at' }] });
    const siteId = await addSiteRow(opened.core, 'Quay Road');
    const body = { kind: 'note' as const, at: '2026-03-01T10:00:00Z', litres: null, note: '' };
    await expect(events.create({ ...place, siteId, body })).rejects.toThrow(NotFoundError);
  });
});
