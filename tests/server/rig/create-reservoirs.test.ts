import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { uuidv7 } from 'uuidv7';
import { NotFoundError } from '../../../server/errors.ts';
import { manualClock, openTestCore, type TestCore } from '../../helpers/core.ts';
import { insertRow } from '../../helpers/rows.ts';
import { type RigBench, setUpRig } from './rig-bench.ts';

const clock = manualClock();
const startMs = Date.parse('2026-03-01T12:00:00Z');
const HOUR_MS = 3_600_000;
let opened: TestCore;
let rig: RigBench;

beforeEach(async () => {
  clock.set(startMs);
  opened = await openTestCore(clock);
  rig = await setUpRig(opened.core);
});

afterEach(() => opened.close());

const body = { name: 'Brown bottle', capacityMl: 500, levelSeriesId: null };
const create = async (given: typeof body & { id?: string } = body) => (await rig.reservoirs.create({ ...rig, body: given })).value.id;
const refill = (reservoirId: string, change: { id?: string; ml?: number; at?: string; productId?: string } = {}) =>
  rig.reservoirs.refill({
    ...rig,
    reservoirId,
    body: { productId: rig.productId, at: '2026-03-01T12:00:00Z', ml: 400, lot: 'L1', ...change },
  });
const only = async () => {
  const [reservoir, ...others] = await rig.reservoirs.list(rig.systemId);
  expect(others).toEqual([]);
  return reservoir;
};
const head = async (number: number, reservoirId: string | null) => {
  const use = { kind: 'carbon' as const, productId: null, reservoirId, mlPerSecond: 1, smallestMl: 0.2 };
  return (await rig.heads.create({ ...rig, body: { deviceId: rig.pumpId, head: number, ...use } })).value.id;
};
const dose = (headId: string, mlPerDay: number) =>
  insertRow(opened.core, 'headSchedule', {
    id: uuidv7(),
    siteId: rig.siteId,
    headId,
    mlPerDay,
    slotMl: mlPerDay,
    slotsUtcMin: '[0]',
    overrideReason: null,
    fromMs: startMs,
    toMs: null,
    actorId: rig.userId,
  });

describe('a reservoir', () => {
  it('tells nothing of what is left before its first refill', async () => {
    const id = await create();
    expect(await only()).toEqual({ id, systemId: rig.systemId, ...body, lastRefill: null, remainingMl: null, lastsUntil: null });
  });

  it('holds the last refill less what its heads gave since, and lasts for the dose planned', async () => {
    const id = await create();
    const one = await head(1, id);
    const two = await head(2, id);
    const elsewhere = await head(3, null);
    await rig.give(one, startMs - HOUR_MS, 50);
    await refill(id, { at: '2026-03-01T12:00:00Z', ml: 400 });
    clock.set(startMs + 4 * HOUR_MS);
    await rig.give(one, startMs + HOUR_MS, 30);
    await rig.give(two, startMs + HOUR_MS, 12);
    await rig.give(two, startMs + HOUR_MS, -2);
    await rig.give(elsewhere, startMs + HOUR_MS, 99);
    await dose(one, 30);
    await dose(two, 6);
    await dose(elsewhere, 1000);
    expect(await only()).toMatchObject({
      lastRefill: { at: '2026-03-01T12:00:00.000Z', ml: 400, productId: rig.productId },
      remainingMl: 360,
      lastsUntil: '2026-03-11T16:00:00.000Z',
    });
  });

  it('counts a head only while it drew from it', async () => {
    const id = await create();
    const headId = await head(1, id);
    await refill(id);
    await rig.give(headId, startMs + HOUR_MS, 10);
    clock.set(startMs + 2 * HOUR_MS);
    await rig.heads.update({ ...rig, headId, body: { reservoirId: null } });
    await rig.give(headId, startMs + 3 * HOUR_MS, 100);
    clock.set(startMs + 4 * HOUR_MS);
    await rig.heads.update({ ...rig, headId, body: { reservoirId: id } });
    await rig.give(headId, startMs + 5 * HOUR_MS, 5);
    expect((await only())?.remainingMl).toBe(385);
  });

  it('starts again from the newest refill, whenever an older one was written down', async () => {
    const id = await create();
    const headId = await head(1, id);
    await refill(id, { ml: 300 });
    await rig.give(headId, startMs, 20);
    clock.set(startMs + HOUR_MS);
    await refill(id, { at: '2026-02-20T12:00:00Z', ml: 500 });
    expect(await only()).toMatchObject({ remainingMl: 280, lastRefill: { ml: 300 } });
  });

  it('is empty, and not less, when the books say so', async () => {
    const id = await create();
    const headId = await head(1, id);
    await refill(id, { ml: 5 });
    await dose(headId, 2);
    await rig.give(headId, startMs + 1, 7);
    expect(await only()).toMatchObject({ remainingMl: 0, lastsUntil: '2026-03-01T12:00:00.000Z' });
  });

  it('is made once when the request is repeated, and refused with its id and another body', async () => {
    const id = uuidv7();
    await create({ ...body, id });
    expect(await rig.reservoirs.create({ ...rig, body: { ...body, id } })).toMatchObject({ isRepeated: true, value: { id } });
    await expect(create({ ...body, id, capacityMl: 1000 })).rejects.toMatchObject({ rule: 'id-taken' });
    expect(await rig.reservoirs.list(rig.systemId)).toHaveLength(1);
  });

  it("is refused with another system's level, and for a system of another site", async () => {
    const levelSeriesId = uuidv7();
    await insertRow(opened.core, 'series', {
      id: levelSeriesId,
      siteId: rig.siteId,
      systemId: rig.neighbour.systemId,
      deviceId: rig.neighbour.pumpId,
      channel: 'level',
      name: null,
      quantity: 'level',
      unit: 'mL',
      lastMs: null,
      lastValue: null,
      conflicts: 0,
      createdAtMs: 0,
    });
    await expect(rig.reservoirs.create({ ...rig, body: { ...body, levelSeriesId } })).rejects.toMatchObject({
      errors: [{ path: 'levelSeriesId' }],
    });
    const there = { ...rig, systemId: rig.neighbour.systemId };
    expect((await rig.reservoirs.create({ ...there, body: { ...body, levelSeriesId } })).value).toMatchObject({ levelSeriesId });
    await expect(rig.reservoirs.create({ ...rig, siteId: rig.foreign.siteId, body })).rejects.toThrow(NotFoundError);
  });
});

describe('a refill', () => {
  it('is written down once when the request is repeated', async () => {
    const id = await create();
    const first = await refill(id, { id: uuidv7() });
    expect(await refill(id, { id: first.value.id })).toEqual({ value: first.value, isRepeated: true });
    await expect(refill(id, { id: first.value.id, ml: 1 })).rejects.toMatchObject({ rule: 'id-taken' });
    expect(await opened.core.reader.selectFrom('refill').select('id').execute()).toHaveLength(1);
  });

  it.each<[string, () => Parameters<typeof refill>[1], string]>([
    ['more than the reservoir holds', () => ({ ml: 501 }), 'ml'],
    ['a time in the future', () => ({ at: '2026-03-01T12:10:01Z' }), 'at'],
    ['a time before 1990', () => ({ at: '1989-03-01T12:00:00Z' }), 'at'],
    ["another site's product", () => ({ productId: rig.foreign.productId }), 'productId'],
  ])('is refused with %s', async (_, change, path) => {
    const id = await create();
    await expect(refill(id, change())).rejects.toMatchObject({ errors: [{ path }] });
    expect((await only())?.lastRefill).toBeNull();
  });

  it("is refused for another site's reservoir", async () => {
    await expect(refill(rig.foreign.reservoirId)).rejects.toThrow(NotFoundError);
  });
});
