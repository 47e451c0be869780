import { describe, expect, it } from 'vitest';
import { createSimpleWater, type SimpleWaterSpec } from '../../../simulators/water/simple-water.ts';
import type { WaterReading } from '../../../simulators/water/water.ts';

const startMs = Date.parse('2026-03-01T00:00:00Z');
const HOUR_MS = 3_600_000;
const DAY_MS = 24 * HOUR_MS;
const spec: SimpleWaterSpec = {
  seed: 1,
  netLitres: 420,
  lightsOnUtcH: 9,
  lightsOffUtcH: 20,
  carbonMgPerMl: 164.6,
  bottleMl: 1_000,
  temperatureC: 25.4,
  nitrateMgPerL: 30,
  phosphateMgPerL: 0.3,
};

function days(count: number, mlPerDay: number, stepMs = 300_000): WaterReading[] {
  const water = createSimpleWater(spec, startMs);
  const readings: WaterReading[] = [];
  for (let atMs = startMs + stepMs; atMs <= startMs + count * DAY_MS; atMs += stepMs) {
    water.advanceTo(atMs);
    if (mlPerDay > 0 && atMs % (2 * HOUR_MS) === 0) water.happen({ kind: 'carbon', ml: mlPerDay / 12 });
    readings.push(water.read());
  }
  return readings;
}
const swing = (values: number[]) => Math.max(...values) - Math.min(...values);

describe('the simple water', () => {
  it('swings by day within what probes in such systems show', () => {
    const day = days(1, 0);
    expect(swing(day.map((one) => one.temperatureC))).toBeGreaterThan(0.3);
    expect(swing(day.map((one) => one.temperatureC))).toBeLessThan(0.9);
    expect(swing(day.map((one) => one.ph))).toBeGreaterThan(0.15);
    expect(swing(day.map((one) => one.ph))).toBeLessThan(0.35);
    expect(swing(day.map((one) => one.oxygenMgPerL))).toBeGreaterThan(0.4);
    expect(swing(day.map((one) => one.oxygenMgPerL))).toBeLessThan(1.2);
  });

  it('has its lowest pH and oxygen in the night', () => {
    const day = days(1, 0);
    const lowest = day.reduce((least, one, index) => (one.oxygenMgPerL < (day[least]?.oxygenMgPerL ?? 0) ? index : least), 0);
    const hour = (lowest * 300_000) / HOUR_MS;
    expect(hour).toBeGreaterThan(3);
    expect(hour).toBeLessThan(9);
  });

  it('loses nitrate and phosphate to carbon over weeks, not days', () => {
    const dosed = days(42, 6.3);
    const plain = days(42, 0);
    const at = (readings: WaterReading[], day: number) => readings[day * 288 - 1]?.nitrateMgPerL ?? Number.NaN;
    expect(at(dosed, 3)).toBeGreaterThan(28);
    expect(at(dosed, 42)).toBeLessThan(22);
    expect(dosed.at(-1)?.phosphateMgPerL).toBeLessThan(0.2);
    expect(at(plain, 42)).toBeGreaterThan(30);
  });

  it('sags in ORP and oxygen after a dose and comes back', () => {
    const [dosed, plain] = [0, 1].map(() => createSimpleWater(spec, startMs));
    dosed?.happen({ kind: 'carbon', ml: 8 });
    const gap = (hours: number) => {
      for (const water of [dosed, plain]) water?.advanceTo(startMs + hours * HOUR_MS);
      return (plain?.read().orpMv ?? 0) - (dosed?.read().orpMv ?? 0);
    };
    expect(gap(2)).toBeGreaterThan(10);
    expect(gap(48)).toBeLessThan(1);
  });

  it('comes to the same nutrients by five-minute and by ten-second steps', () => {
    const coarse = days(5, 8.4).at(-1);
    const fine = days(5, 8.4, 10_000).at(-1);
    expect(coarse?.nitrateMgPerL).toBeCloseTo(fine?.nitrateMgPerL ?? 0, 1);
    expect(coarse?.phosphateMgPerL).toBeCloseTo(fine?.phosphateMgPerL ?? 0, 3);
  });

  it('goes on from what it saved as if it had never stopped', () => {
    const whole = createSimpleWater(spec, startMs);
    whole.happen({ kind: 'feeding' });
    whole.advanceTo(startMs + DAY_MS);
    const resumed = createSimpleWater(spec, 0, JSON.parse(JSON.stringify(whole.save())));
    for (const water of [whole, resumed]) {
      water.happen({ kind: 'water-change', share: 0.1 });
      water.happen({ kind: 'refill', ml: 500 });
      water.advanceTo(startMs + 2 * DAY_MS);
    }
    expect(resumed.read()).toEqual(whole.read());
  });
});
