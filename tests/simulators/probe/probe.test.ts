import { describe, expect, it } from 'vitest';
import { probeChannels, type ProbeChannelName } from '../../../simulators/probe/channels.ts';
import { senmlPack, undatedPack } from '../../../simulators/probe/pack.ts';
import { newProbe, stepProbe } from '../../../simulators/probe/step-probe.ts';
import type { WaterReading } from '../../../simulators/water/water.ts';

const water: WaterReading = {
  temperatureC: 25,
  ph: 8.1,
  orpMv: 350,
  conductivityMsPerCm: 53.07,
  oxygenMgPerL: 6.8,
  nitrateMgPerL: 10,
  phosphateMgPerL: 0.1,
  bottleMl: 800,
  skimmerW: 24,
};
const all = Object.keys(probeChannels).filter((name): name is ProbeChannelName => name in probeChannels);

function readings(seed: number, count: number, everyMs: number, channel: ProbeChannelName, from = water): number[] {
  let state = newProbe(seed);
  return Array.from({ length: count }, (_, index) => {
    const step = stepProbe(state, [channel], index * everyMs, from);
    state = step.state;
    return step.values[0]?.value ?? Number.NaN;
  });
}
const mean = (values: number[]) => values.reduce((sum, value) => sum + value, 0) / values.length;
const sd = (values: number[]) => Math.sqrt(mean(values.map((value) => (value - mean(values)) ** 2)));

describe('a probe set', () => {
  it('reads the same for the same seed, and other noise for another', () => {
    expect(readings(1, 20, 10_000, 'ph')).toEqual(readings(1, 20, 10_000, 'ph'));
    expect(readings(1, 20, 10_000, 'ph')).not.toEqual(readings(2, 20, 10_000, 'ph'));
  });

  it.each(all)('%s scatters around the truth by its noise', (name) => {
    const channel = probeChannels[name];
    const values = readings(3, 400, 1_000, name).map((value) => value / channel.perUnit);
    const truth = channel.read(water);
    expect(Math.abs(mean(values) - truth)).toBeLessThan(channel.noise / 2 + channel.driftPerWeek / 4);
    expect(sd(values)).toBeGreaterThan(channel.noise * 0.8);
    expect(sd(values)).toBeLessThan(channel.noise * 1.25 + channel.driftPerWeek / 20);
  });

  it('drifts over a week by about what it says, whatever the spacing of the samples', () => {
    const weekMs = 7 * 86_400_000;
    const offsets = (everyMs: number) =>
      Array.from({ length: 60 }, (_, seed) => (readings(seed, weekMs / everyMs + 1, everyMs, 'orp').at(-1) ?? 0) * 1_000 - 350);
    for (const everyMs of [3_600_000, 86_400_000]) {
      const spread = sd(offsets(everyMs));
      expect(spread).toBeGreaterThan(3);
      expect(spread).toBeLessThan(6);
    }
  });

  it('follows a step of the water with its time constant', () => {
    let state = newProbe(1);
    const temperature = (atMs: number, temperatureC: number) => {
      const step = stepProbe(state, ['temperature'], atMs, { ...water, temperatureC });
      state = step.state;
      return step.values[0]?.value ?? 0;
    };
    temperature(0, 20);
    expect(temperature(30_000, 30)).toBeCloseTo(20 + 10 * (1 - Math.exp(-1)), 0);
    expect(temperature(600_000, 30)).toBeCloseTo(30, 0);
  });

  it('sends the units of the standard: ORP in volts, conductivity in S/m, oxygen in kg/m3, levels in litres', () => {
    const { values } = stepProbe(newProbe(1), all, 1_767_225_600_000, water);
    const byName = new Map(senmlPack('pr1', [{ atMs: 1_767_225_600_000, values }]).map((record) => [record.n, record]));
    expect(byName.get('orp')).toMatchObject({ u: 'V' });
    expect(byName.get('orp')?.v).toBeCloseTo(0.35, 1);
    expect(byName.get('conductivity')).toMatchObject({ u: 'S/m' });
    expect(byName.get('conductivity')?.v).toBeCloseTo(5.307, 1);
    expect(byName.get('oxygen')).toMatchObject({ u: 'kg/m3' });
    expect(byName.get('oxygen')?.v).toBeCloseTo(0.0068, 3);
    expect(byName.get('level:bottle')).toMatchObject({ u: 'l' });
    expect(byName.get('temperature')).toMatchObject({ u: 'Cel' });
    expect(byName.get('ph')).toMatchObject({ u: 'pH' });
    expect(byName.get('power:skimmer')).toMatchObject({ u: 'W' });
  });
});

describe('a pack', () => {
  const at = (atMs: number, value: number) => ({ atMs, values: [{ channel: 'ph' as const, value }] });

  it('has base name and time in its first record, and times relative to it', () => {
    expect(senmlPack('pr1', [at(1_767_225_600_000, 8.1), at(1_767_225_610_500, 8.2)])).toEqual([
      { bn: 'pr1:', bt: 1_767_225_600, n: 'ph', u: 'pH', v: 8.1 },
      { n: 'ph', u: 'pH', t: 10.5, v: 8.2 },
    ]);
  });

  it('carries no time when there is no clock', () => {
    expect(undatedPack('pr1', at(0, 8.1).values)).toEqual([{ bn: 'pr1:', n: 'ph', u: 'pH', v: 8.1 }]);
  });
});
