import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { fleetSystemSchema } from '#shared/demo/fleet-plan.ts';
import { createDevices } from '../../../server/devices/create-devices.ts';
import { demoSites } from '../../../server/demo/scenario.ts';
import { renewDemoDevices } from '../../../server/demo/fleet-systems.ts';
import { resultSeries } from '../../../server/demo/result-series.ts';
import { seedDemo } from '../../../server/demo/seed-demo.ts';
import { manualClock, openTestCore, type TestCore } from '../../helpers/core.ts';

const anchorMs = Date.parse('2026-12-01T15:00:00Z');

describe('the demo devices in a database that came back without their memory', () => {
  let test: TestCore;
  beforeAll(async () => {
    test = await openTestCore(manualClock(anchorMs), { DEMO: '1' });
    await seedDemo(test.core, anchorMs);
  });
  afterAll(() => test.close());

  it('get new passwords that work, and have no past to tell', async () => {
    const { authenticateDevice } = createDevices({ core: test.core, disconnect: () => undefined });
    const systems = await renewDemoDevices(test.core, anchorMs);
    expect(systems.map((one) => one.name)).toEqual(['Front window', 'Frag shelf', 'Bench cube', 'Lobby']);
    for (const system of systems) {
      expect(fleetSystemSchema.parse(system)).toEqual(system);
      expect(system.events).toEqual([]);
      expect(system.pump?.schedules ?? []).toEqual([]);
      for (const device of [system.pump, system.probe]) {
        if (device !== null) expect(await authenticateDevice(device.deviceId, device.password)).toBe(true);
      }
    }
  });
});

describe('a series of results', () => {
  const story = demoSites[0]?.systems[0]?.results[0];
  it('is the same each time, in steps of the kit, and ends where its story ends', () => {
    if (story === undefined) throw new Error('the scenario has a story');
    const results = resultSeries('front', story);
    expect(resultSeries('front', story)).toEqual(results);
    expect(results[0]?.daysAgo).toBe(119);
    expect(results.at(-1)?.daysAgo).toBe(0);
    for (const { value } of results) expect(value % story.step).toBeCloseTo(0, 6);
    expect(Math.abs((results.at(-1)?.value ?? 0) - 21)).toBeLessThanOrEqual(1);
  });
});
