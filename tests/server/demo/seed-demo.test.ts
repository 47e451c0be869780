import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { FleetSystem } from '#shared/demo/fleet-plan.ts';
import { netVolumeLitres } from '#shared/domain/net-volume.ts';
import { createPasswordHasher } from '../../../server/auth/password-hasher.ts';
import { DEMO_PASSWORD } from '../../../server/demo/scenario.ts';
import { seedDemo } from '../../../server/demo/seed-demo.ts';
import { manualClock, openTestCore, type TestCore } from '../../helpers/core.ts';

const anchorMs = Date.parse('2026-12-01T15:00:00Z');
const DAY_MS = 86_400_000;

describe('the demo seed', () => {
  let test: TestCore;
  let first: FleetSystem[];
  beforeAll(async () => {
    test = await openTestCore(manualClock(anchorMs), { DEMO: '1' });
    first = await seedDemo(test.core, anchorMs);
  });
  afterAll(() => test.close());

  const count = async (
    table: 'user' | 'membership' | 'system' | 'device' | 'head' | 'headSchedule' | 'test' | 'event' | 'handDose' | 'refill',
  ) => {
    const { rows } = await test.core.reader
      .selectFrom(table)
      .select((eb) => eb.fn.countAll<number>().as('rows'))
      .executeTakeFirstOrThrow();
    return rows;
  };

  it('lets the five people sign in, each with the role that they have', async () => {
    const people = await test.core.reader
      .selectFrom('membership')
      .innerJoin('user', 'user.id', 'membership.userId')
      .innerJoin('site', 'site.id', 'membership.siteId')
      .select(['user.email', 'user.passwordHash', 'site.name', 'membership.role'])
      .orderBy('user.email')
      .orderBy('site.name')
      .execute();
    expect(people.map((one) => `${one.email}: ${one.role} of ${one.name}`)).toEqual([
      'keeper@ternlane.example: keeper of Quay Road Dental',
      'keeper@ternlane.example: keeper of Tern Lane',
      'owner@quayroad.example: owner of Quay Road Dental',
      'owner@ternlane.example: owner of Tern Lane',
      'sitter@ternlane.example: sitter of Tern Lane',
      'viewer@quayroad.example: viewer of Quay Road Dental',
    ]);
    expect(await createPasswordHasher().verify(people[0]?.passwordHash, DEMO_PASSWORD)).toBe(true);
  });

  it('has the four systems with their net volumes', async () => {
    const systems = await test.core.reader.selectFrom('system').selectAll().orderBy('name').execute();
    expect(systems.map((one) => [one.name, netVolumeLitres(one)])).toEqual([
      ['Bench cube', 75],
      ['Frag shelf', 160],
      ['Front window', 420],
      ['Lobby', 610],
    ]);
  });

  it('has Front window on the third of three equal steps, one each 14 days', async () => {
    const doses = await test.core.reader
      .selectFrom('headSchedule')
      .innerJoin('head', 'head.id', 'headSchedule.headId')
      .innerJoin('device', 'device.id', 'head.deviceId')
      .select(['headSchedule.mlPerDay', 'headSchedule.slotMl', 'headSchedule.fromMs', 'headSchedule.toMs'])
      .where('device.name', '=', 'Front window pump')
      .orderBy('headSchedule.fromMs')
      .execute();
    expect(doses.map((one) => [one.mlPerDay, one.slotMl])).toEqual([
      [2.1, 0.175],
      [4.2, 0.35],
      [6.3, 0.525],
    ]);
    expect(doses.slice(1).map((one, index) => (one.fromMs - (doses[index]?.fromMs ?? 0)) / DAY_MS)).toEqual([14, 14]);
    expect(doses.at(-1)?.toMs).toBeNull();
  });

  it('tells the devices of every version of their schedules, with the body as it is published', async () => {
    const front = first.find((one) => one.name === 'Front window');
    const published = await test.core.reader
      .selectFrom('scheduleVersion')
      .select(['body', 'fromMs'])
      .where('deviceId', '=', front?.pump?.deviceId ?? '')
      .orderBy('version')
      .execute();
    expect(front?.pump?.schedules).toEqual(published.map((one) => ({ fromMs: one.fromMs, payload: JSON.parse(one.body) })));
    expect(published).toHaveLength(3);
  });

  it('dates nothing later than the start, and nothing of a past later than the day it was done', async () => {
    for (const table of ['test', 'event', 'handDose', 'refill'] as const) {
      const rows = await test.core.reader.selectFrom(table).select(['atMs', 'createdAtMs']).execute();
      for (const row of rows) {
        expect(row.atMs).toBeLessThan(anchorMs);
        expect(row.createdAtMs).toBe(row.atMs);
      }
    }
  });

  it('has falling nutrients under carbon, and too few tests on Bench cube', async () => {
    const results = await test.core.reader
      .selectFrom('test')
      .innerJoin('system', 'system.id', 'test.systemId')
      .select(['system.name', 'test.quantity', 'test.canonicalMgPerL', 'test.atMs'])
      .orderBy('test.atMs')
      .execute();
    const of = (name: string, quantity: string) => results.filter((one) => one.name === name && one.quantity === quantity);
    const nitrate = of('Front window', 'nitrate');
    expect(nitrate.length).toBeGreaterThanOrEqual(17);
    expect(nitrate.at(-1)?.canonicalMgPerL).toBeLessThan((nitrate[11]?.canonicalMgPerL ?? 0) - 5);
    expect(of('Frag shelf', 'phosphate').at(-1)?.canonicalMgPerL).toBeGreaterThan(0.03);
    expect(of('Frag shelf', 'phosphate').at(-1)?.canonicalMgPerL).toBeLessThan(0.1);
    expect(of('Bench cube', 'nitrate')).toHaveLength(1);
  });

  it('adds nothing when it is run again after an interruption, and still hands out credentials that work', async () => {
    const tables = ['user', 'membership', 'system', 'device', 'head', 'headSchedule', 'test', 'event', 'handDose', 'refill'] as const;
    const before = await Promise.all(tables.map(count));
    const second = await seedDemo(test.core, anchorMs);
    expect(await Promise.all(tables.map(count))).toEqual(before);
    expect(second.map((one) => one.probe?.deviceId)).toEqual(first.map((one) => one.probe?.deviceId));
    expect(second.every((one) => one.probe !== null && one.probe.password.length > 20)).toBe(true);
  });
});
