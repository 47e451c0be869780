import { array, assert, integer, property } from 'fast-check';
import { describe, expect, it } from 'vitest';
import { spanWords, splitAtGaps } from '../../../components/charts/gaps.ts';
import { reduceColumns } from '../../../components/charts/reduce-columns.ts';

const every = (stepMs: number, count: number, startMs = 0) => Array.from({ length: count }, (_, i) => startMs + i * stepMs);

describe('splitAtGaps', () => {
  it('finds nothing in no data, and one stretch in one sample', () => {
    expect(splitAtGaps({ resolutionMs: 0, t: [] })).toEqual({ stretches: [], gaps: [] });
    expect(splitAtGaps({ resolutionMs: 0, t: [5] })).toEqual({ stretches: [{ start: 0, end: 1 }], gaps: [] });
  });
  it('keeps an even series in one stretch', () => {
    expect(splitAtGaps({ resolutionMs: 0, t: every(1000, 100) }).gaps).toEqual([]);
  });
  it('breaks where the distance exceeds three times the usual, and not at just three', () => {
    const atThree = [...every(1000, 20), ...every(1000, 20, 22_000)];
    const overThree = [...every(1000, 20), ...every(1000, 20, 22_001)];
    expect(splitAtGaps({ resolutionMs: 0, t: atThree }).gaps).toEqual([]);
    expect(splitAtGaps({ resolutionMs: 0, t: overThree })).toEqual({
      stretches: [
        { start: 0, end: 20 },
        { start: 20, end: 40 },
      ],
      gaps: [{ fromMs: 19_000, toMs: 22_001 }],
    });
  });
  it('measures buckets by their width, and lets a gap begin where the last bucket ends', () => {
    const t = [...every(60_000, 5), ...every(60_000, 5, 600_000)];
    expect(splitAtGaps({ resolutionMs: 60_000, t }).gaps).toEqual([{ fromMs: 300_000, toMs: 600_000 }]);
  });
  it('takes buckets that hold a sample each fifth time for an unbroken series', () => {
    expect(splitAtGaps({ resolutionMs: 60_000, t: every(300_000, 40) }).gaps).toEqual([]);
  });
  it('sees no gap where a probe changes from one sample in 5 minutes to one in 10 seconds', () => {
    const t = [...every(300_000, 30), ...every(10_000, 60, 30 * 300_000)];
    expect(splitAtGaps({ resolutionMs: 0, t }).gaps).toEqual([]);
  });
  it('finds an hour missing in the fast part of such a series', () => {
    const fastStart = 30 * 300_000;
    const t = [...every(300_000, 30), ...every(10_000, 60, fastStart), ...every(10_000, 60, fastStart + 3_600_000)];
    expect(splitAtGaps({ resolutionMs: 0, t }).gaps).toEqual([{ fromMs: fastStart + 590_000, toMs: fastStart + 3_600_000 }]);
  });
  it('loses no sample and orders its stretches, whatever the times', () => {
    assert(
      property(array(integer({ min: 1, max: 1e6 }), { maxLength: 60 }), (distances) => {
        const t = distances.reduce<number[]>((times, distance) => [...times, (times.at(-1) ?? 0) + distance], []);
        const { stretches, gaps } = splitAtGaps({ resolutionMs: 0, t });
        expect(stretches.flatMap(({ start, end }) => t.slice(start, end))).toEqual(t);
        expect(gaps.length).toBe(Math.max(0, stretches.length - 1));
      }),
    );
  });
});

describe('spanWords', () => {
  it.each([
    [40_000, '40 s'],
    [45 * 60_000, '45 min'],
    [3 * 3_600_000 + 5, '3 h'],
    [47 * 3_600_000, '47 h'],
    [3 * 86_400_000, '3 d'],
  ])('says %i ms as %s', (spanMs, words) => {
    expect(spanWords(spanMs)).toBe(words);
  });
});

describe('reduceColumns', () => {
  const raw = (t: number[], values: number[]) => ({
    resolutionMs: 0,
    t,
    min: values,
    mean: values,
    max: values,
    count: values.map(() => 1),
  });

  it('leaves what is few enough as it is', () => {
    const few = raw(every(1000, 10), every(1, 10));
    expect(reduceColumns(few, 10)).toBe(few);
  });
  it('keeps every extreme and the mean', () => {
    const values = every(1, 5000).map((i) => Math.sin(i / 7) + (i === 3333 ? 50 : 0) - (i === 1234 ? 40 : 0));
    const reduced = reduceColumns(raw(every(1000, 5000), values), 2000);
    expect(reduced.t.length).toBeLessThanOrEqual(2000);
    expect(Math.max(...reduced.max)).toBe(Math.max(...values));
    expect(Math.min(...reduced.min)).toBe(Math.min(...values));
    const mean = values.reduce((sum, value) => sum + value, 0) / values.length;
    const weighted = reduced.mean.reduce((sum, value, i) => sum + value * (reduced.count[i] ?? 0), 0) / 5000;
    expect(weighted).toBeCloseTo(mean, 9);
  });
  it('merges nothing across a gap', () => {
    const t = [...every(1000, 3000), ...every(1000, 3000, 100_000_000)];
    const reduced = reduceColumns(raw(t, t), 2000);
    expect(splitAtGaps(reduced).gaps.length).toBe(1);
    expect(reduced.max.some((most, i) => most > 90_000_000 && (reduced.min[i] ?? 0) < 10_000_000)).toBe(false);
  });
});
