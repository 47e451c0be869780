import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { uuidv7 } from 'uuidv7';
import { rigEndpoints } from '#shared/contract/rig.ts';
import { query } from '../../../server/db/open.ts';
import { headUseAt } from '../../../server/doses/head-use.ts';
import { NotFoundError } from '../../../server/errors.ts';
import { manualClock, openTestCore, type TestCore } from '../../helpers/core.ts';
import { insertRow } from '../../helpers/rows.ts';
import { type RigBench, setUpRig } from './rig-bench.ts';

const clock = manualClock();
const startMs = Date.parse('2026-03-01T12:00:00Z');
let opened: TestCore;
let rig: RigBench;

beforeEach(async () => {
  clock.set(startMs);
  opened = await openTestCore(clock);
  rig = await setUpRig(opened.core);
});

afterEach(() => opened.close());

const carbonUse = () => ({
  deviceId: rig.pumpId,
  head: 1,
  kind: 'carbon' as const,
  productId: rig.productId,
  reservoirId: null,
  mlPerSecond: 1.1,
  smallestMl: 0.2,
});
type HeadChange = Partial<Parameters<RigBench['heads']['create']>[0]['body']>;
const create = (change: HeadChange = {}) => rig.heads.create({ ...rig, body: { ...carbonUse(), ...change } });

/** What a run of the head counts as that began at a time. */
const inForce = (atMs: number) => opened.core.writer.commit((tx) => headUseAt(tx, { id: rig.pumpId, systemId: rig.systemId }, 1, atMs));

/** The assignments of all heads that are in force. */
const openAssignments = () => opened.core.reader.selectFrom('headAssignment').select('smallestMl').where('toMs', 'is', null).execute();

/** A dose of 2 mL a day in 4 portions, as it was set for a head. */
const addDose = (headId: string) =>
  insertRow(opened.core, 'headSchedule', {
    id: uuidv7(),
    siteId: rig.siteId,
    headId,
    mlPerDay: 2,
    slotMl: 0.5,
    slotsUtcMin: '[480,600,720,840]',
    overrideReason: null,
    fromMs: startMs,
    toMs: null,
    actorId: rig.userId,
  });

describe('a head', () => {
  it('is put to use on the system of its pump, without a schedule and not stopped', async () => {
    const { value } = await create();
    expect(value).toMatchObject({ ...carbonUse(), systemId: rig.systemId, deviceName: 'pump', schedule: null, stop: null });
    expect(await rig.heads.list(rig.systemId)).toEqual([value]);
    expect(await rig.heads.list(rig.neighbour.systemId)).toEqual([]);
  });

  it('is made once when the request is repeated, even after it was changed', async () => {
    const id = uuidv7();
    await create({ id });
    clock.advance(1000);
    await rig.heads.update({ ...rig, headId: id, body: { smallestMl: 0.5 } });
    expect(await create({ id })).toMatchObject({ isRepeated: true, value: { id, smallestMl: 0.5 } });
    await expect(create({ id, mlPerSecond: 2 })).rejects.toMatchObject({ rule: 'id-taken' });
  });

  it('cannot be put to use twice', async () => {
    await create();
    await expect(create()).rejects.toMatchObject({ rule: 'head-in-use' });
    await expect(create({ head: 2 })).resolves.toMatchObject({ isRepeated: false });
  });

  it.each<[string, () => HeadChange, string]>([
    ['a probe', () => ({ deviceId: rig.probeId }), 'deviceId'],
    ["another site's pump", () => ({ deviceId: rig.foreign.pumpId }), 'deviceId'],
    ["another system's pump", () => ({ deviceId: rig.neighbour.pumpId }), 'deviceId'],
    ["another site's product", () => ({ productId: rig.foreign.productId }), 'productId'],
    ["another site's reservoir", () => ({ reservoirId: rig.foreign.reservoirId }), 'reservoirId'],
    ["another system's reservoir", () => ({ reservoirId: rig.neighbour.reservoirId }), 'reservoirId'],
  ])('is refused with %s', async (_, change, path) => {
    await expect(create(change())).rejects.toMatchObject({ errors: [{ path }] });
    expect(await rig.heads.list(rig.systemId)).toEqual([]);
  });
});

describe('under a latched alarm', () => {
  let alarmId: string;

  beforeEach(async () => {
    alarmId = uuidv7();
    const flags = { active: 0, acknowledged: 1, latched: 1, interlock: 1, shelvedUntilMs: null, returnedAtMs: null, closedAtMs: null };
    const words = { code: 'volume-hour', target: 'system', limitKind: 'hard', priority: 'urgent', unit: 'mL', evidence: '{}' } as const;
    const rest = { tripKey: 'system', tripSeq: 1, value: 3, limitValue: 2, takenBy: null, arriveAtMs: null, raisedAtMs: startMs };
    await insertRow(opened.core, 'alarm', { id: alarmId, siteId: rig.siteId, systemId: rig.systemId, ...words, ...flags, ...rest });
  });

  const orders = () => opened.core.reader.selectFrom('deviceOrder').select(['head', 'do', 'state']).execute();

  it('a head put to carbon use is stopped from the first moment, and its pump told', async () => {
    const { value } = await create();
    expect(value.stop).toMatchObject({ cause: 'interlock', alarmId, confirmedAt: null });
    expect(await orders()).toEqual([{ head: 1, do: 'stop', state: 'waiting' }]);
  });

  it('a head that becomes one for carbon is stopped, and one for something else is not', async () => {
    const { value } = await create({ kind: 'other' });
    expect(value.stop).toBeNull();
    const changed = await rig.heads.update({ ...rig, headId: value.id, body: { kind: 'carbon' } });
    expect(changed.stop).toMatchObject({ cause: 'interlock', alarmId });
    expect(await orders()).toEqual([{ head: 1, do: 'stop', state: 'waiting' }]);
  });
});

describe('changing what a head is used for', () => {
  it('lets a run take what was in force when it began', async () => {
    const { value } = await create();
    clock.advance(3_600_000);
    await rig.heads.update({ ...rig, headId: value.id, body: { kind: 'other', productId: null, mlPerSecond: 2 } });
    const strength = { oxygenDemandMgPerMl: expect.closeTo(657.82, 1) as number };
    expect(await inForce(startMs - 1)).toMatchObject({ kind: 'carbon', oxygenDemandMgPerMl: null });
    expect(await inForce(startMs)).toMatchObject({ kind: 'carbon', headId: value.id, ...strength });
    expect(await inForce(startMs + 3_599_999)).toMatchObject({ kind: 'carbon', ...strength });
    expect(await inForce(startMs + 3_600_000)).toMatchObject({ kind: 'other', headId: value.id, productRevisionId: null });
  });

  it('leaves what was not sent', async () => {
    const { value } = await create();
    const body = rigEndpoints.updateHead.body.parse({ smallestMl: 0.4 });
    const changed = await rig.heads.update({ ...rig, headId: value.id, body });
    expect(changed).toEqual({ ...value, smallestMl: 0.4 });
  });

  it('keeps one assignment in force through changes in the same millisecond and a clock set back', async () => {
    const { value } = await create();
    await rig.heads.update({ ...rig, headId: value.id, body: { smallestMl: 0.3 } });
    clock.advance(-60_000);
    await rig.heads.update({ ...rig, headId: value.id, body: { smallestMl: 0.4 } });
    expect(await openAssignments()).toEqual([{ smallestMl: 0.4 }]);
    expect(await rig.heads.list(rig.systemId)).toHaveLength(1);
    const rows = await opened.core.reader.selectFrom('headAssignment').select(['fromMs', 'toMs']).execute();
    expect(rows.every((row) => row.toMs === null || row.toMs >= row.fromMs)).toBe(true);
  });

  it('writes nothing when nothing changes', async () => {
    const { value } = await create();
    const count = async () => (await opened.core.reader.selectFrom('audit').select('seq').execute()).length;
    const before = await count();
    await rig.heads.update({ ...rig, headId: value.id, body: { kind: 'carbon', smallestMl: 0.2 } });
    expect(await count()).toBe(before);
  });

  it('publishes a schedule with the new delivery rate where the head has a dose', async () => {
    const { value } = await create();
    await addDose(value.id);
    const changed = await rig.heads.update({ ...rig, headId: value.id, body: { mlPerSecond: 0.8 } });
    expect(changed.schedule).toEqual({ mlPerDay: 2, slotMl: 0.5, slotsUtcMin: [480, 600, 720, 840], since: '2026-03-01T12:00:00.000Z' });
    const { body } = await opened.core.reader.selectFrom('scheduleVersion').select('body').executeTakeFirstOrThrow();
    expect(JSON.parse(body)).toMatchObject({ heads: [{ head: 1, mlPerSecond: 0.8, slotMl: 0.5 }] });
  });

  it.each<[string, { kind?: 'other' }, () => HeadChange]>([
    ['larger portions than it is set to give', {}, () => ({ smallestMl: 0.51 })],
    ['another product, whose ceiling nobody held the dose to', {}, () => ({ productId: null })],
    ['carbon, where the dose was set for something else', { kind: 'other' }, () => ({ kind: 'carbon' })],
  ])('to %s is refused while a schedule runs', async (_, use, change) => {
    const { value } = await create(use);
    await addDose(value.id);
    const before = await rig.heads.list(rig.systemId);
    const body = rigEndpoints.updateHead.body.parse(change());
    await expect(rig.heads.update({ ...rig, headId: value.id, body })).rejects.toMatchObject({ rule: 'schedule-no-longer-fits' });
    expect(await rig.heads.list(rig.systemId)).toEqual(before);
    await opened.core.writer.commit((tx) => tx.run(query.updateTable('headSchedule').set({ mlPerDay: 0, slotMl: 0, slotsUtcMin: '[]' })));
    await expect(rig.heads.update({ ...rig, headId: value.id, body })).resolves.toMatchObject(change());
  });

  it('lets the portions of a schedule be as small as the head can give', async () => {
    const { value } = await create();
    await addDose(value.id);
    await expect(rig.heads.update({ ...rig, headId: value.id, body: { smallestMl: 0.5 } })).resolves.toMatchObject({ smallestMl: 0.5 });
  });

  it("is refused for foreign references and another site's head", async () => {
    const { value } = await create();
    const update = (body: object, siteId = rig.siteId) => rig.heads.update({ siteId, userId: rig.userId, headId: value.id, body });
    await expect(update({ productId: rig.foreign.productId })).rejects.toMatchObject({ errors: [{ path: 'productId' }] });
    await expect(update({ reservoirId: rig.neighbour.reservoirId })).rejects.toMatchObject({ errors: [{ path: 'reservoirId' }] });
    await expect(update({ smallestMl: 1 }, rig.foreign.siteId)).rejects.toThrow(NotFoundError);
    expect(await rig.heads.list(rig.systemId)).toEqual([value]);
  });

  it('shows the stop that stands', async () => {
    const { value } = await create();
    await insertRow(opened.core, 'headStop', {
      id: uuidv7(),
      siteId: rig.siteId,
      systemId: rig.systemId,
      deviceId: rig.pumpId,
      head: 1,
      cause: 'person',
      alarmId: null,
      stoppedAtMs: startMs,
      actorKind: 'user',
      actorId: rig.userId,
      resumedAtMs: null,
      resumedBy: null,
    });
    const [head] = await rig.heads.list(rig.systemId);
    expect(head).toMatchObject({
      id: value.id,
      stop: { cause: 'person', alarmId: null, at: '2026-03-01T12:00:00.000Z', confirmedAt: null },
    });
    await opened.core.writer.commit((tx) => tx.run(query.updateTable('headStop').set({ confirmedAtMs: startMs + 2000 })));
    expect(await rig.heads.list(rig.systemId)).toMatchObject([{ stop: { confirmedAt: '2026-03-01T12:00:02.000Z' } }]);
  });
});
