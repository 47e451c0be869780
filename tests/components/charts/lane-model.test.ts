import { describe, expect, it } from 'vitest';
import type { DoseInput } from '../../../components/charts/dose-bars.ts';
import { laneModel, placedTimeTicks, type LaneFrame, type LaneInput } from '../../../components/charts/lane-model.ts';
import { clusterTests, type TestPoint } from '../../../components/charts/test-marks.ts';
import { valueAxis } from '../../../components/charts/value-axis.ts';

const hourMs = 3_600_000;
const dayMs = 24 * hourMs;
const fromMs = Date.parse('2026-06-01T00:00:00Z');
const frame: LaneFrame = { range: { fromMs, toMs: fromMs + 10 * dayMs }, zone: 'UTC', widthPx: 356, heightPx: 96, remPx: 16 };

const empty: LaneInput = {
  id: 'lane',
  title: 'Lane',
  unit: 'mg/L',
  decimals: 1,
  fromZero: true,
  leastSpan: 1,
  band: null,
  limits: [],
  traces: [],
  tests: null,
  doses: null,
};
const test = (id: string, atMs: number, value: number, rest: Partial<TestPoint> = {}): TestPoint => ({
  id,
  tMs: atMs,
  value,
  below: false,
  edited: false,
  ...rest,
});
const columns = (t: number[], values: number[], resolutionMs = 0) => ({
  resolutionMs,
  t,
  min: values.map((value) => value - 1),
  mean: values,
  max: values.map((value) => value + 1),
  count: values.map(() => 1),
});

describe('laneModel', () => {
  it('has room for a lane with nothing in it', () => {
    const model = laneModel(empty, frame);
    expect(model.valueTicks.length).toBeGreaterThanOrEqual(2);
    expect(model.valueTicks.every((tick) => Number.isFinite(tick.y))).toBe(true);
    expect(model.traces).toEqual([]);
  });
  it('lays time from the gutter to the right edge, the same for every lane', () => {
    const ticks = placedTimeTicks(frame);
    // 4 June: three of ten days along.
    expect(ticks[0]?.x).toBe(48 + 90);
    expect(laneModel(empty, frame).timeTicks).toEqual(ticks);
  });
  it('gives labels the room that larger text needs', () => {
    const large = { ...frame, remPx: 32 };
    expect(laneModel(empty, large).plot.left).toBe(96);
    const day = { fromMs, toMs: fromMs + dayMs };
    expect(placedTimeTicks({ ...large, range: day }).length).toBeLessThan(placedTimeTicks({ ...frame, range: day }).length);
  });
  it('reaches over the band, the limits and everything in sight', () => {
    const lane: LaneInput = {
      ...empty,
      band: { low: 3, high: 10, label: 'aim 3 to 10' },
      limits: [{ kind: 'hard', value: 30, label: 'hard limit 30' }],
      tests: { shape: 'circle', dashed: false, points: [test('a', fromMs + dayMs, 14)] },
    };
    const model = laneModel(lane, frame);
    expect(model.values.low).toBe(0);
    expect(model.values.high).toBeGreaterThanOrEqual(30);
    expect(model.band?.top).toBeLessThan(model.band?.bottom ?? 0);
    expect(model.limits[0]?.y).toBeGreaterThanOrEqual(model.plot.top);
  });
  it('does not stretch for what lies outside the range', () => {
    const outside = laneModel({ ...empty, tests: { shape: 'circle', dashed: false, points: [test('a', fromMs - dayMs, 500)] } }, frame);
    expect(outside.values.high).toBeLessThan(10);
  });
  it('reaches the line between two tests that lie on both sides of the range', () => {
    const points = [test('a', fromMs - dayMs, 24), test('b', fromMs + 11 * dayMs, 22)];
    expect(laneModel({ ...empty, tests: { shape: 'circle', dashed: false, points } }, frame).values.high).toBeGreaterThanOrEqual(24);
  });
  it('draws at most three series in a lane', () => {
    const trace = (id: string) => ({ id, label: id, dashed: false, columns: columns([fromMs], [5]) });
    expect(laneModel({ ...empty, traces: ['a', 'b', 'c', 'd'].map(trace) }, frame).traces.map((one) => one.id)).toEqual(['a', 'b', 'c']);
  });
});

describe('traces', () => {
  const times = Array.from({ length: 48 }, (_, i) => fromMs + i * hourMs);
  const withGap = times.filter((_, i) => i < 10 || i >= 34);
  const traceOf = (t: number[], resolutionMs: number) =>
    laneModel(
      {
        ...empty,
        traces: [
          {
            id: 'a',
            label: 'A',
            dashed: false,
            columns: columns(
              t,
              t.map(() => 25),
              resolutionMs,
            ),
          },
        ],
      },
      frame,
    ).traces[0];

  it('draws raw samples as they are, without an envelope', () => {
    const trace = traceOf(times, 0);
    expect(trace?.reduced).toBe(false);
    expect(trace?.stretches.map((stretch) => [stretch.mean.length, stretch.low.length])).toEqual([[48, 0]]);
  });
  it('gives buckets an envelope, and stands each at its middle', () => {
    const trace = traceOf(times, hourMs);
    expect(trace?.stretches[0]?.low.length).toBe(48);
    const [low, mean, high] = [trace?.stretches[0]?.low[0], trace?.stretches[0]?.mean[0], trace?.stretches[0]?.high[0]];
    expect(low?.y).toBeGreaterThan(mean?.y ?? Infinity);
    expect(high?.y).toBeLessThan(mean?.y ?? -Infinity);
    expect(mean?.x).toBeCloseTo(48 + (300 * 0.5) / 240, 6);
  });
  it('draws nothing in a gap and says how long it lasted where the words fit', () => {
    const trace = traceOf(withGap, 0);
    expect(trace?.stretches.map((stretch) => stretch.mean.length)).toEqual([10, 14]);
    expect(trace?.gaps).toEqual([{ x1: expect.closeTo(48 + 11.25, 6), x2: expect.closeTo(48 + 42.5, 6), label: null }]);
    const near = laneModel(
      {
        ...empty,
        traces: [
          {
            id: 'a',
            label: 'A',
            dashed: false,
            columns: columns(
              withGap,
              withGap.map(() => 25),
            ),
          },
        ],
      },
      { ...frame, range: { fromMs, toMs: fromMs + 2 * dayMs } },
    );
    expect(near.traces[0]?.gaps[0]?.label).toBe('no data 25 h');
  });
});

describe('tests by hand', () => {
  const marksOf = (points: TestPoint[]) => laneModel({ ...empty, tests: { shape: 'circle', dashed: false, points } }, frame).tests;

  it('joins results that follow one another by a line', () => {
    const marks = marksOf([test('b', fromMs + 2 * dayMs, 5), test('a', fromMs, 4)]);
    expect(marks?.lines).toHaveLength(1);
    expect(marks?.lines[0]?.[0]?.x).toBe(48);
    expect(marks?.meanBars).toEqual([]);
  });
  it('breaks the line at a result below detection, whose value nobody knows', () => {
    const marks = marksOf([
      test('a', fromMs, 4),
      test('b', fromMs + dayMs, 5),
      test('c', fromMs + 2 * dayMs, 2, { below: true }),
      test('d', fromMs + 3 * dayMs, 5),
      test('e', fromMs + 4 * dayMs, 5),
    ]);
    expect(marks?.lines.map((line) => line.length)).toEqual([2, 2]);
    expect(marks?.marks.map((mark) => mark.below)).toEqual([false, false, true, false, false]);
  });
  it('puts a bar at the mean of repeats, and leads the line through it', () => {
    const marks = marksOf([test('a', fromMs + dayMs, 4), test('b', fromMs + dayMs + 600_000, 6), test('c', fromMs + 5 * dayMs, 5)]);
    expect(marks?.marks).toHaveLength(3);
    expect(marks?.meanBars).toHaveLength(1);
    expect(marks?.meanBars[0]?.y).toBe(marks?.marks[2]?.y);
    expect(marks?.lines[0]).toHaveLength(2);
  });
  it('counts no result below detection in the mean of repeats', () => {
    const marks = marksOf([test('a', fromMs + dayMs, 4), test('b', fromMs + dayMs + 600_000, 0.5, { below: true })]);
    expect(marks?.meanBars).toEqual([]);
  });
  it('draws the uncertainty of the kit as a whisker that never goes under 0', () => {
    const [mark] = marksOf([test('a', fromMs + dayMs, 1, { uncertainty: 2 })])?.marks ?? [];
    const model = laneModel(
      { ...empty, tests: { shape: 'circle', dashed: false, points: [test('a', fromMs + dayMs, 1, { uncertainty: 2 })] } },
      frame,
    );
    expect(mark?.whisker?.bottom).toBe(model.plot.bottom);
    expect(mark?.whisker?.top).toBeLessThan(mark?.y ?? 0);
  });
  it('keeps tests over an hour apart in groups of their own', () => {
    const clusters = clusterTests([test('a', 0, 1), test('b', hourMs, 1), test('c', hourMs + 1, 1)]);
    expect(clusters.map((cluster) => cluster.map((one) => one.id))).toEqual([['a', 'b'], ['c']]);
  });
});

describe('doses', () => {
  const doses = (input: Partial<DoseInput>) =>
    laneModel({ ...empty, doses: { per: 'day', columns: [], steps: [], ...input } }, frame).doses;
  const day = (n: number, pumpMl: number, handMl: number) => ({
    fromMs: fromMs + n * dayMs,
    toMs: fromMs + (n + 1) * dayMs,
    pumpMl,
    handMl,
  });

  it('draws a column a day from zero up', () => {
    const [bar] = doses({ columns: [day(1, 6, 0)] })?.bars ?? [];
    expect(bar).toMatchObject({ kind: 'pump', x: expect.closeTo(78 + 6, 6), width: expect.closeTo(18, 6) });
    expect((bar?.y ?? 0) + (bar?.height ?? 0)).toBe(88);
  });
  it('stands a hand dose beside the pump, never on top of it', () => {
    const bars = doses({ columns: [day(1, 6, 3)] })?.bars ?? [];
    expect(bars.map((bar) => bar.kind)).toEqual(['pump', 'hand']);
    expect(bars[1]?.x).toBeGreaterThanOrEqual((bars[0]?.x ?? 0) + (bars[0]?.width ?? 0));
    expect((bars[0]?.height ?? 0) / (bars[1]?.height ?? 1)).toBeCloseTo(2, 6);
  });
  it('leaves out what is not given and what is out of sight', () => {
    expect(doses({ columns: [day(1, 0, 0), day(-5, 6, 0), day(30, 6, 0)] })?.bars).toEqual([]);
  });
  it('draws a portion as a thin column at its time', () => {
    const [bar] =
      doses({ per: 'portion', columns: [{ fromMs: fromMs + 5 * dayMs, toMs: fromMs + 5 * dayMs + 1000, pumpMl: 0.5, handMl: 0 }] })?.bars ??
      [];
    expect(bar?.width).toBe(3);
    expect((bar?.x ?? 0) + 1.5).toBeCloseTo(198, 6);
  });
  it('draws the plan as a step line over the whole range', () => {
    const line = doses({
      steps: [
        { fromMs: fromMs - 40 * dayMs, mlPerDay: 2 },
        { fromMs: fromMs + 5 * dayMs, mlPerDay: 4 },
      ],
    })?.stepLine;
    expect(line?.map((corner) => corner.x)).toEqual([48, 198, 198, 348]);
    expect(new Set(line?.map((corner) => corner.y)).size).toBe(2);
  });
});

describe('valueAxis', () => {
  const axis = (values: number[], rest: Partial<Parameters<typeof valueAxis>[0]> = {}) =>
    valueAxis({ values, fromZero: false, leastSpan: 0, topPx: 8, heightPx: 80, tickCount: 3, ...rest });

  it('gives ticks as many decimals as their distance needs', () => {
    expect(axis([0, 0.12], { fromZero: true }).ticks.map((tick) => tick.label)).toEqual(['0.00', '0.05', '0.10', '0.15']);
  });
  it('does not blow up the noise of a probe', () => {
    const { low, high } = axis([25.1, 25.2], { leastSpan: 1 });
    expect(high - low).toBeGreaterThanOrEqual(1);
  });
  it('stands on one value, on none, and on what is not a number', () => {
    for (const values of [[5], [], [NaN, Infinity]]) {
      const { ticks, toY } = axis(values);
      expect(ticks.length).toBeGreaterThan(0);
      expect(Number.isFinite(toY(5))).toBe(true);
    }
  });
});
