import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { uuidv7 } from 'uuidv7';
import { recordEndpoints } from '#shared/contract/records.ts';
import type { Role } from '#shared/domain/role.ts';
import { ForbiddenError, NotFoundError } from '../../../server/errors.ts';
import { createTests, type Tests } from '../../../server/records/create-tests.ts';
import { testOf } from '../../../server/records/test-rows.ts';
import { manualClock, openTestCore, type TestCore } from '../../helpers/core.ts';
import { addPerson, addPlace, addSiteRow, addSystemRow } from '../../helpers/rows.ts';

const clock = manualClock();
const startMs = Date.parse('2026-03-01T12:00:00Z');
let opened: TestCore;
let tests: Tests;
let place: { siteId: string; systemId: string; userId: string };
let sitterId: string;

beforeEach(async () => {
  clock.set(startMs);
  opened = await openTestCore(clock);
  tests = createTests(opened.core);
  place = await addPlace(opened.core);
  sitterId = await addPerson(opened.core, 'Sitter', { [place.siteId]: 'sitter' });
});

afterEach(() => opened.close());

const body = recordEndpoints.createTest.body.parse({ at: '2026-03-01T11:00:00Z', quantity: 'nitrate', value: 12, unit: 'mg/L NO3' });
const as = (role: Role, userId = place.userId) => ({ siteId: place.siteId, userId, role });
const create = (change: Partial<typeof body> = {}, member = as('keeper')) =>
  tests.create({ ...member, systemId: place.systemId, body: { ...body, ...change } });
const listed = async (systemId = place.systemId) => (await tests.page(systemId, {}, { limit: 100, after: null })).map(testOf);
const changes = async () =>
  (await opened.core.reader.selectFrom('change').select(['type', 'payload']).orderBy('seq').execute()).map((row) => ({
    type: row.type,
    data: JSON.parse(row.payload) as unknown,
  }));

describe('writing a test down', () => {
  it('keeps the result as given and as mg/L of the ion, with who did it, and tells the live stream', async () => {
    const { value } = await create({ value: 2.5, unit: 'mg/L NO3-N', note: 'second try' });
    expect(value).toMatchObject({
      at: '2026-03-01T11:00:00.000Z',
      value: 2.5,
      unit: 'mg/L NO3-N',
      below: false,
      note: 'second try',
      by: 'Keeper of Tern Lane',
      byId: place.userId,
      edited: false,
    });
    expect(value.canonicalMgPerL).toBeCloseTo(2.5 * 4.42664, 4);
    expect(await listed()).toEqual([value]);
    expect(await changes()).toEqual([{ type: 'test', data: value }]);
  });

  it('keeps a result below detection as one, and not as 0', async () => {
    const { value } = await create({ quantity: 'phosphate', value: 0.02, unit: 'mg/L PO4', below: true });
    expect(value).toMatchObject({ below: true, value: 0.02, canonicalMgPerL: 0.02 });
  });

  it.each<[string, Partial<typeof body>, string]>([
    ['a nitrate of 5000', { value: 5000 }, 'value'],
    ['a nitrate that is 5000 as the ion', { value: 1130, unit: 'mg/L NO3-N' }, 'value'],
    ['a phosphate of 50', { quantity: 'phosphate', value: 50, unit: 'mg/L PO4' }, 'value'],
    ['the unit of another quantity', { unit: 'mg/L PO4' }, 'unit'],
    ['a time in the future', { at: '2026-03-01T12:10:01Z' }, 'at'],
    ['a time before 1990', { at: '1989-12-31T23:59:59Z' }, 'at'],
    ['below 0', { value: 0, below: true }, 'value'],
  ])('is refused with %s, and nothing is stored', async (_, change, path) => {
    await expect(create(change)).rejects.toMatchObject({ errors: [{ path }] });
    expect(await listed()).toEqual([]);
    expect(await changes()).toEqual([]);
  });

  it('says which units fit', async () => {
    await expect(create({ unit: 'mg/L PO4' })).rejects.toThrow('mg/L NO3 or mg/L NO3-N');
  });

  it.each([
    ['a negative result', { value: -1 }],
    ['no number', { value: NaN }],
    ['a time without an offset', { at: '2026-03-01T11:00:00' }],
    ['an unknown unit', { unit: 'ppm' }],
    ['an over-long note', { note: 'x'.repeat(2001) }],
  ])('is refused by its shape with %s', (_, change) => {
    expect(recordEndpoints.createTest.body.safeParse({ ...body, ...change }).success).toBe(false);
  });

  it('allows a phone whose clock is ahead by ten minutes', async () => {
    await expect(create({ at: '2026-03-01T12:10:00Z' })).resolves.toMatchObject({ isRepeated: false });
  });

  it('happens once when the request is repeated, even after a correction', async () => {
    const id = uuidv7();
    await create({ id });
    await tests.update({ ...as('keeper'), testId: id, body: { value: 13 } });
    expect(await create({ id })).toMatchObject({ isRepeated: true, value: { id, value: 13 } });
    expect(await listed()).toHaveLength(1);
  });

  it('is refused with an id that is in use, in the same words for an id of another site', async () => {
    const id = uuidv7();
    await create({ id });
    await expect(create({ id, value: 13 })).rejects.toMatchObject({ rule: 'id-taken' });
    const siteId = await addSiteRow(opened.core, 'Quay Road');
    const systemId = await addSystemRow(opened.core, siteId);
    const elsewhere = { siteId, systemId, userId: place.userId, role: 'owner' as const };
    const [here, there] = await Promise.allSettled([create({ id, value: 13 }), tests.create({ ...elsewhere, body: { ...body, id } })]);
    expect(there).toEqual(here);
    expect(await listed(systemId)).toEqual([]);
  });

  it('is refused for a system of another site', async () => {
    const siteId = await addSiteRow(opened.core, 'Quay Road');
    await expect(tests.create({ ...as('keeper'), siteId, systemId: place.systemId, body })).rejects.toThrow(NotFoundError);
  });
});

describe('correcting a test', () => {
  it('changes what is sent and leaves the rest, and keeps what it was', async () => {
    const { value } = await create({ note: 'kit A', below: true, value: 2 });
    clock.advance(60_000);
    const sent = recordEndpoints.updateTest.body.parse({ value: 1 });
    const changed = await tests.update({ ...as('keeper'), testId: value.id, body: sent });
    expect(changed).toEqual({ ...value, value: 1, canonicalMgPerL: 1, edited: true });
    const [revision] = await opened.core.reader.selectFrom('testRevision').selectAll().execute();
    expect(JSON.parse(revision?.before ?? '')).toMatchObject({ value: 2, note: 'kit A', qualifier: '<' });
    expect((await changes()).at(-1)).toEqual({ type: 'test', data: changed });
  });

  it('computes the ion again when only the unit changes', async () => {
    const { value } = await create();
    const changed = await tests.update({ ...as('keeper'), testId: value.id, body: { unit: 'mg/L NO3-N' } });
    expect(changed.canonicalMgPerL).toBeCloseTo(12 * 4.42664, 3);
  });

  it('writes nothing when nothing changes', async () => {
    const { value } = await create();
    expect(await tests.update({ ...as('keeper'), testId: value.id, body: { value: 12 } })).toEqual(value);
    expect(await opened.core.reader.selectFrom('testRevision').selectAll().execute()).toEqual([]);
  });

  it.each<[string, object, string]>([
    ['a quantity whose unit it does not have', { quantity: 'phosphate' }, 'unit'],
    ['a result that cannot be', { value: 5000 }, 'value'],
    ['a time in the future', { at: '2026-03-02T12:00:00Z' }, 'at'],
  ])('is refused with %s', async (_, change, path) => {
    const { value } = await create();
    await expect(tests.update({ ...as('keeper'), testId: value.id, body: change })).rejects.toMatchObject({ errors: [{ path }] });
    expect(await listed()).toEqual([value]);
  });

  it("is open to a sitter for one's own tests, and to the keeper for all", async () => {
    const own = await create({}, as('sitter', sitterId));
    const others = await create({ at: '2026-03-01T10:00:00Z' });
    const update = (testId: string, member: ReturnType<typeof as>) => tests.update({ ...member, testId, body: { value: 9 } });
    await expect(update(own.value.id, as('sitter', sitterId))).resolves.toMatchObject({ value: 9, by: 'Sitter' });
    await expect(update(others.value.id, as('sitter', sitterId))).rejects.toThrow(ForbiddenError);
    await expect(tests.remove({ ...as('sitter', sitterId), testId: others.value.id })).rejects.toThrow(ForbiddenError);
    await expect(tests.update({ ...as('keeper'), testId: own.value.id, body: { value: 8 } })).resolves.toMatchObject({ by: 'Sitter' });
    expect((await listed()).map((test) => test.value)).toEqual([8, 12]);
  });
});

describe('deleting a test', () => {
  it('takes it out of every list and tells the live stream, once', async () => {
    const { value } = await create();
    await tests.remove({ ...as('keeper'), testId: value.id });
    await tests.remove({ ...as('keeper'), testId: value.id });
    expect(await listed()).toEqual([]);
    expect((await changes()).filter((change) => (change.data as { deleted?: boolean }).deleted)).toHaveLength(1);
    await expect(tests.update({ ...as('keeper'), testId: value.id, body: { value: 1 } })).rejects.toThrow(NotFoundError);
  });

  it('is undone by posting it again with its id, whoever made the id', async () => {
    const { value } = await create({ note: 'n' });
    await tests.remove({ ...as('keeper'), testId: value.id });
    const again = await create({ id: value.id, note: 'n' });
    expect(again).toEqual({ value, isRepeated: false });
    expect(await listed()).toEqual([value]);
    expect(await create({ id: value.id, note: 'n' })).toEqual({ value, isRepeated: true });
    const actions = await opened.core.reader.selectFrom('audit').select('action').orderBy('seq').execute();
    expect(actions.map((row) => row.action)).toEqual(['create', 'delete', 'restore']);
  });

  it('is undone with the values that are posted, and still checked', async () => {
    const { value } = await create();
    await tests.remove({ ...as('keeper'), testId: value.id });
    await expect(create({ id: value.id, value: 5000 })).rejects.toMatchObject({ errors: [{ path: 'value' }] });
    const { value: restored } = await create({ id: value.id, value: 14 });
    expect(restored).toMatchObject({ value: 14, canonicalMgPerL: 14, edited: true });
  });

  it('cannot be undone by a sitter for somebody else, nor from another site', async () => {
    const { value } = await create();
    await tests.remove({ ...as('keeper'), testId: value.id });
    await expect(create({ id: value.id }, as('sitter', sitterId))).rejects.toThrow(ForbiddenError);
    const siteId = await addSiteRow(opened.core, 'Quay Road');
    const systemId = await addSystemRow(opened.core, siteId);
    const elsewhere = { siteId, systemId, userId: sitterId, role: 'owner' as const };
    await expect(tests.create({ ...elsewhere, body: { ...body, id: value.id } })).rejects.toMatchObject({ rule: 'id-taken' });
    await expect(tests.remove({ ...elsewhere, testId: value.id })).rejects.toThrow(NotFoundError);
  });
});

describe('the list of tests', () => {
  it('comes newest first, by quantity and range, page by page', async () => {
    for (const hour of ['08', '09', '09', '10']) await create({ at: `2026-03-01T${hour}:00:00Z` });
    await create({ at: '2026-03-01T09:30:00Z', quantity: 'phosphate', value: 0.1, unit: 'mg/L PO4' });
    const first = await tests.page(place.systemId, { quantity: 'nitrate' }, { limit: 2, after: null });
    const last = first.at(-1);
    const after = last === undefined ? null : { key: last.atMs, id: last.id };
    const rest = await tests.page(place.systemId, { quantity: 'nitrate' }, { limit: 10, after });
    const hours = [...first, ...rest].map((row) => new Date(row.atMs).getUTCHours());
    expect(hours).toEqual([10, 9, 9, 8]);
    expect(new Set([...first, ...rest].map((row) => row.id)).size).toBe(4);

    const range = { fromMs: Date.parse('2026-03-01T09:00:00Z'), toMs: Date.parse('2026-03-01T10:00:00Z') };
    expect(await tests.page(place.systemId, range, { limit: 10, after: null })).toHaveLength(3);
  });
});
