import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { uuidv7 } from 'uuidv7';
import { systemBodySchema } from '#shared/contract/systems.ts';
import type { Row } from '../../../server/db/schema.ts';
import { BadInputError, NotFoundError } from '../../../server/errors.ts';
import { createSystems, type Systems } from '../../../server/systems/create-systems.ts';
import { manualClock, openTestCore, type TestCore } from '../../helpers/core.ts';
import { addPerson, addSiteRow, addSystemRow, insertRow } from '../../helpers/rows.ts';

const clock = manualClock();
let opened: TestCore;
let systems: Systems;
let siteId: string;
let userId: string;

beforeEach(async () => {
  clock.set(Date.parse('2026-03-29T12:00:00Z'));
  opened = await openTestCore(clock);
  systems = createSystems(opened.core);
  siteId = await addSiteRow(opened.core, 'Tern Lane', 'Europe/Berlin');
  userId = await addPerson(opened.core, 'Keeper', { [siteId]: 'keeper' });
});

afterEach(() => opened.close());

const body = { name: 'Front window', displayLitres: 400, sumpLitres: 80, displacementLitres: 60 };

const alarm = (systemId: string, priority: 'low' | 'high' | 'urgent', more: Partial<Row<'alarm'>> = {}) =>
  insertRow(opened.core, 'alarm', {
    id: uuidv7(),
    siteId,
    systemId,
    code: 'volume-day',
    target: 'system',
    limitKind: 'soft',
    priority,
    active: 1,
    acknowledged: 0,
    latched: 0,
    interlock: 0,
    shelvedUntilMs: null,
    raisedAtMs: clock.nowMs(),
    returnedAtMs: null,
    closedAtMs: null,
    value: null,
    limitValue: null,
    unit: 'mL',
    evidence: '{}',
    takenBy: null,
    arriveAtMs: null,
    tripKey: 'system',
    tripSeq: 0,
    ...more,
  });

const ledger = (systemId: string, at: string, deltaMl: number, kind: 'carbon' | 'other' = 'carbon') =>
  insertRow(opened.core, 'doseLedger', {
    siteId,
    systemId,
    sourceKind: 'run',
    sourceId: uuidv7(),
    step: 0,
    headId: null,
    kind,
    productRevisionId: null,
    atMs: Date.parse(at),
    deltaMl,
    oxygenDemandMg: null,
    receivedMs: clock.nowMs(),
  });

describe('a new system', () => {
  it('has its net volume, and a status in which nothing happened yet', async () => {
    const { value, isRepeated } = await systems.create({ siteId, userId, body });
    expect(isRepeated).toBe(false);
    expect(value).toMatchObject({ ...body, siteId, siteName: 'Tern Lane', timeZone: 'Europe/Berlin', role: 'keeper', netLitres: 420 });
    expect(value.status).toEqual({
      worstPriority: null,
      openAlarms: 0,
      unacknowledgedAlarms: 0,
      latched: false,
      stoppedHeads: 0,
      unconfirmedStops: 0,
      carbonHeads: 0,
      offlineDevices: 0,
      heardAt: null,
      givenTodayMl: 0,
      plannedTodayMl: null,
      plannedSoFarMl: null,
      nitrate: null,
      phosphate: null,
    });
  });

  it('is made once when the request is repeated with its id, even after it was renamed', async () => {
    const id = uuidv7();
    await systems.create({ siteId, userId, body: { ...body, id } });
    await systems.update({ siteId, systemId: id, userId, body: { name: 'Shop window' } });
    const again = await systems.create({ siteId, userId, body: { ...body, id } });
    expect(again.isRepeated).toBe(true);
    expect(again.value.name).toBe('Shop window');
    expect(await systems.listOf(userId)).toHaveLength(1);
  });

  it('is refused with an id that is in use, here or in another site', async () => {
    const id = uuidv7();
    await systems.create({ siteId, userId, body: { ...body, id } });
    await expect(systems.create({ siteId, userId, body: { ...body, id, name: 'Other' } })).rejects.toMatchObject({ rule: 'id-taken' });
    const otherSite = await addSiteRow(opened.core, 'Quay Road');
    await expect(systems.create({ siteId: otherSite, userId, body: { ...body, id } })).rejects.toMatchObject({ rule: 'id-taken' });
  });

  it.each([480, 500])('is refused when %d of its 480 L are displaced', async (displacementLitres) => {
    const refused = systems.create({ siteId, userId, body: { ...body, displacementLitres } });
    await expect(refused).rejects.toMatchObject({ errors: [{ path: 'displacementLitres' }] });
    expect(await systems.listOf(userId)).toEqual([]);
  });

  it.each([
    ['a negative volume', { ...body, displayLitres: -1 }],
    ['a volume that is no number', { ...body, displayLitres: NaN }],
    ['a negative sump', { ...body, sumpLitres: -0.1 }],
    ['an over-long name', { ...body, name: 'x'.repeat(81) }],
    ['a name of spaces', { ...body, name: '   ' }],
    ['a name of two lines', { ...body, name: 'a\nb' }],
  ])('is refused by its shape with %s', (_, refused) => {
    expect(systemBodySchema.safeParse(refused).success).toBe(false);
  });
});

describe('changing a system', () => {
  it('changes what is sent and leaves the rest, with a mark for the alarms, the audit and the live stream', async () => {
    const { value } = await systems.create({ siteId, userId, body });
    const changed = await systems.update({ siteId, systemId: value.id, userId, body: { displacementLitres: 80 } });
    expect(changed).toMatchObject({ name: 'Front window', displacementLitres: 80, netLitres: 400 });
    const { reader } = opened.core;
    expect(await reader.selectFrom('dirtySystem').select('systemId').execute()).toEqual([{ systemId: value.id }]);
    expect(await reader.selectFrom('change').select(['type', 'payload']).execute()).toEqual([
      { type: 'plan', payload: '{"reason":"system"}' },
    ]);
    const audit = await reader.selectFrom('audit').select(['action', 'actorId', 'entity']).execute();
    expect(audit).toEqual([
      { action: 'create', actorId: userId, entity: 'system' },
      { action: 'update', actorId: userId, entity: 'system' },
    ]);
  });

  it('cannot leave it without water', async () => {
    const { value } = await systems.create({ siteId, userId, body });
    await expect(systems.update({ siteId, systemId: value.id, userId, body: { displayLitres: 1, sumpLitres: 0 } })).rejects.toThrow(
      BadInputError,
    );
    expect((await systems.get(userId, value.id)).netLitres).toBe(420);
  });

  it('finds nothing in a site that it does not belong to', async () => {
    const { value } = await systems.create({ siteId, userId, body });
    const otherSite = await addSiteRow(opened.core, 'Quay Road');
    await expect(systems.update({ siteId: otherSite, systemId: value.id, userId, body: { name: 'x' } })).rejects.toThrow(NotFoundError);
  });
});

describe('the list', () => {
  it("shows the systems of one's own sites only, with the role in each", async () => {
    const otherSite = await addSiteRow(opened.core, 'Quay Road');
    await addSystemRow(opened.core, siteId, 'Front window');
    await addSystemRow(opened.core, otherSite, 'Lobby');
    const viewer = await addPerson(opened.core, 'Viewer', { [otherSite]: 'viewer' });
    expect((await systems.listOf(viewer)).map(({ name, role }) => [name, role])).toEqual([['Lobby', 'viewer']]);
    expect(await systems.listOf(await addPerson(opened.core, 'Nobody'))).toEqual([]);
  });

  it('puts the worst first, then goes by name', async () => {
    const ids = new Map<string, string>();
    for (const name of ['Zulu', 'Alpha', 'Low', 'Offline', 'High', 'Latched', 'Urgent', 'Closed']) {
      ids.set(name, await addSystemRow(opened.core, siteId, name));
    }
    const id = (name: string) => ids.get(name) ?? '';
    await alarm(id('Urgent'), 'urgent');
    await alarm(id('Urgent'), 'low', { code: 'device-offline', acknowledged: 1 });
    await alarm(id('Latched'), 'low', { latched: 1, active: 0, acknowledged: 1 });
    await alarm(id('High'), 'high');
    await alarm(id('Low'), 'low');
    await alarm(id('Closed'), 'urgent', { closedAtMs: clock.nowMs() });
    const deviceId = uuidv7();
    await insertRow(opened.core, 'device', {
      id: deviceId,
      siteId,
      systemId: id('Offline'),
      name: 'Pump',
      kind: 'pump',
      secretHash: '',
      credentialVersion: 1,
      createdAtMs: 0,
    });
    await insertRow(opened.core, 'deviceState', {
      deviceId,
      online: 0,
      heardAtMs: Date.parse('2026-03-29T11:00:00Z'),
      changedAtMs: 0,
      scheduleVersion: null,
      clockOffsetMs: null,
      clockUnset: 0,
      heads: '[]',
    });
    const listed = await systems.listOf(userId);
    expect(listed.map((system) => system.name)).toEqual(['Urgent', 'Latched', 'High', 'Offline', 'Low', 'Alpha', 'Closed', 'Zulu']);
    expect(listed[0]?.status).toMatchObject({ worstPriority: 'urgent', openAlarms: 2, unacknowledgedAlarms: 1, latched: false });
    expect(listed[1]?.status).toMatchObject({ latched: true, unacknowledgedAlarms: 0 });
    expect(listed[3]?.status).toMatchObject({ offlineDevices: 1, heardAt: '2026-03-29T11:00:00.000Z' });
  });

  it('takes as many queries for fifty systems as for one', async () => {
    const counted = async () => {
      let queries = 0;
      const executor = opened.core.reader.getExecutor();
      const original = executor.executeQuery.bind(executor);
      executor.executeQuery = (...given) => {
        queries += 1;
        return original(...given);
      };
      await systems.listOf(userId);
      executor.executeQuery = original;
      return queries;
    };
    await addSystemRow(opened.core, siteId, 'System 0');
    const forOne = await counted();
    for (let place = 1; place < 50; place += 1) await addSystemRow(opened.core, siteId, `System ${place}`);
    expect(forOne).toBeGreaterThan(3);
    expect(await counted()).toBe(forOne);
  });
});

describe("today's dose", () => {
  it("counts carbon since the site's midnight, on a day of 23 hours", async () => {
    // Berlin's 29 March 2026 runs from 23:00 UTC of the 28th to 22:00 UTC.
    const systemId = await addSystemRow(opened.core, siteId);
    await ledger(systemId, '2026-03-28T22:59:59.999Z', 8);
    await ledger(systemId, '2026-03-28T23:00:00Z', 0.5);
    await ledger(systemId, '2026-03-29T11:00:00Z', 0.25);
    await ledger(systemId, '2026-03-29T11:30:00Z', -0.125);
    await ledger(systemId, '2026-03-29T11:30:00Z', 4, 'other');
    await ledger(systemId, '2026-03-29T22:00:00Z', 16);
    expect((await systems.get(userId, systemId)).status.givenTodayMl).toBe(0.625);
  });

  it('tells what is planned for the day and until now, by the schedules in force', async () => {
    const systemId = await addSystemRow(opened.core, siteId);
    const deviceId = uuidv7();
    const headId = uuidv7();
    const fromMs = Date.parse('2026-03-20T00:00:00Z');
    await insertRow(opened.core, 'device', {
      id: deviceId,
      siteId,
      systemId,
      name: 'Pump',
      kind: 'pump',
      secretHash: '',
      credentialVersion: 1,
      createdAtMs: 0,
    });
    await insertRow(opened.core, 'head', { id: headId, siteId, deviceId, head: 1, createdAtMs: 0 });
    await insertRow(opened.core, 'headAssignment', {
      id: uuidv7(),
      siteId,
      headId,
      systemId,
      kind: 'carbon',
      productId: null,
      reservoirId: null,
      mlPerSecond: 1,
      smallestMl: 0.2,
      fromMs,
      toMs: null,
      actorId: userId,
    });
    // Due at midnight in Berlin, at 13:00 UTC and at 22:00 UTC, which is the next midnight of this short day.
    const head = {
      head: 1,
      enabled: true,
      slotMl: 0.5,
      slotsUtcMin: [0, 660, 780, 1320, 1380],
      mlPerSecond: 1,
      maxMlPerRun: 1,
      maxMlPerHour: 1,
      maxMlPerDay: 3,
    };
    await insertRow(opened.core, 'scheduleVersion', {
      deviceId,
      version: 1,
      siteId,
      body: JSON.stringify({ version: 1, heads: [head] }),
      fromMs,
      cause: 'set',
      actorKind: 'user',
      actorId: userId,
      publishedAtMs: null,
    });
    const { status } = await systems.get(userId, systemId);
    expect(status).toMatchObject({ carbonHeads: 1, stoppedHeads: 0, unconfirmedStops: 0 });
    // 28th 23:00, 29th 00:00, 11:00 and 13:00 UTC; the slot of 22:00 belongs to the next day.
    expect(status.plannedTodayMl).toBe(2);
    expect(status.plannedSoFarMl).toBe(1.5);
  });
});

describe('the stops of a system', () => {
  it('are told apart by whether the pump has said that its carbon head is stopped', async () => {
    const systemId = await addSystemRow(opened.core, siteId);
    const deviceId = uuidv7();
    const device = { id: deviceId, siteId, systemId, name: 'Pump', kind: 'pump', secretHash: '', credentialVersion: 1 } as const;
    await insertRow(opened.core, 'device', { ...device, createdAtMs: 0 });
    const at = { siteId, systemId, deviceId };
    for (const [head, kind, confirmedAtMs] of [
      [1, 'carbon', null],
      [2, 'carbon', clock.nowMs()],
      [3, 'other', null],
    ] as const) {
      const headId = uuidv7();
      await insertRow(opened.core, 'head', { id: headId, siteId, deviceId, head, createdAtMs: 0 });
      const use = { kind, productId: null, reservoirId: null, mlPerSecond: 1, smallestMl: 0.2, fromMs: 0, toMs: null, actorId: userId };
      await insertRow(opened.core, 'headAssignment', { id: uuidv7(), siteId, headId, systemId, ...use });
      const by = { cause: 'person', alarmId: null, actorKind: 'user', actorId: userId } as const;
      const times = { stoppedAtMs: clock.nowMs(), confirmedAtMs, resumedAtMs: null, resumedBy: null };
      await insertRow(opened.core, 'headStop', { id: uuidv7(), ...at, head, ...by, ...times });
    }
    expect((await systems.get(userId, systemId)).status).toMatchObject({ carbonHeads: 2, stoppedHeads: 2, unconfirmedStops: 1 });
  });
});

describe('the newest tests', () => {
  it('are those that were not deleted, one of each nutrient', async () => {
    const systemId = await addSystemRow(opened.core, siteId);
    const test = (quantity: string, at: string, canonicalMgPerL: number, more: Partial<Row<'test'>> = {}) =>
      insertRow(opened.core, 'test', {
        id: uuidv7(),
        siteId,
        systemId,
        atMs: Date.parse(at),
        quantity,
        qualifier: '=',
        value: canonicalMgPerL,
        unit: 'mg/L NO3',
        canonicalMgPerL,
        note: '',
        actorId: userId,
        createdAtMs: 0,
        updatedAtMs: 0,
        deletedAtMs: null,
        ...more,
      });
    await test('nitrate', '2026-03-20T12:00:00Z', 20);
    await test('nitrate', '2026-03-27T12:00:00Z', 12);
    await test('nitrate', '2026-03-28T12:00:00Z', 99, { deletedAtMs: 1 });
    await test('phosphate', '2026-03-27T12:00:00Z', 0.02, { qualifier: '<' });
    const { status } = await systems.get(userId, systemId);
    expect(status.nitrate).toEqual({ at: '2026-03-27T12:00:00.000Z', canonicalMgPerL: 12, below: false });
    expect(status.phosphate).toEqual({ at: '2026-03-27T12:00:00.000Z', canonicalMgPerL: 0.02, below: true });
  });
});
