import { describe, expect, it } from 'vitest';
import type { LaneInput } from '../../../components/charts/lane-model.ts';
import { laneSummary } from '../../../components/charts/lane-summary.ts';
import { laneTables } from '../../../components/charts/lane-table.ts';
import { columnAt, nearestIndex, readLanes } from '../../../components/charts/nearest.ts';

const hourMs = 3_600_000;
const startMs = Date.parse('2026-06-01T00:00:00Z');
const range = { fromMs: startMs, toMs: startMs + 48 * hourMs };
const at = (hours: number) => startMs + hours * hourMs;

const base = { unit: 'mg/L', decimals: 1, fromZero: true, leastSpan: 1, band: null, limits: [], traces: [], tests: null, doses: null };
const hourly = (hours: number[], resolutionMs = 0) => ({
  resolutionMs,
  t: hours.map(at),
  min: hours.map((h) => 25 + h / 100 - 0.1),
  mean: hours.map((h) => 25 + h / 100),
  max: hours.map((h) => 25 + h / 100 + 0.1),
  count: hours.map(() => 1),
});
const hours = Array.from({ length: 48 }, (_, i) => i).filter((h) => h < 10 || h >= 20);
const probe: LaneInput = {
  ...base,
  id: 'temperature',
  title: 'Temperature',
  unit: '°C',
  traces: [{ id: 't', label: 'Sump', dashed: false, columns: hourly(hours) }],
};
const nitrate: LaneInput = {
  ...base,
  id: 'nitrate',
  title: 'Nitrate',
  band: { low: 3, high: 10, label: 'aim 3 to 10' },
  tests: {
    shape: 'circle',
    dashed: false,
    points: [
      { id: 'a', tMs: at(5), value: 14, below: false, edited: false },
      { id: 'b', tMs: at(30), value: 0.5, below: true, edited: true },
    ],
  },
};
const daily: LaneInput = {
  ...base,
  id: 'dose',
  title: 'Carbon, by day',
  unit: 'mL',
  doses: {
    per: 'day',
    columns: [
      { fromMs: at(0), toMs: at(24), pumpMl: 6, handMl: 0 },
      { fromMs: at(24), toMs: at(48), pumpMl: 4, handMl: 2 },
    ],
    steps: [{ fromMs: at(-100), mlPerDay: 6.3 }],
  },
};

describe('nearestIndex', () => {
  it.each([
    [[], 5, -1],
    [[1], 99, 0],
    [[1, 5, 9], -4, 0],
    [[1, 5, 9], 99, 2],
    [[1, 5, 9], 6, 1],
    [[1, 5, 9], 7, 1],
    [[1, 5, 9], 7.1, 2],
    [[1, 5, 9], 5, 1],
  ])('finds in %j what is nearest to %d', (ascending, wanted, index) => {
    expect(nearestIndex(ascending, wanted)).toBe(index);
  });
});

describe('columnAt', () => {
  it('finds nothing deep in a gap or far outside the data', () => {
    const columns = hourly(hours);
    expect(columnAt(columns, at(5.2))).toBe(5);
    expect(columnAt(columns, at(14))).toBeNull();
    expect(columnAt(columns, at(100))).toBeNull();
    expect(columnAt({ ...columns, t: [] }, at(5))).toBeNull();
  });
  it('takes a bucket for the whole of its width', () => {
    const buckets = hourly([0, 1, 2], hourMs);
    expect(columnAt(buckets, at(1.9))).toBe(1);
    expect(columnAt(buckets, at(2.1))).toBe(2);
  });
});

describe('readLanes', () => {
  const read = (lane: LaneInput, tMs: number) => readLanes([lane], tMs, hourMs)[0];

  it('reads a probe at the crosshair, and says when there is no data', () => {
    expect(read(probe, at(8))?.text).toBe('25.1 °C');
    expect(read(probe, at(14))?.text).toBe('no data');
  });
  it('reads a bucket with its spread', () => {
    const reduced = { ...probe, traces: [{ id: 't', label: 'Sump', dashed: false, columns: hourly([0, 1, 2], hourMs) }] };
    expect(read(reduced, at(1.5))?.text).toBe('25.0 °C (24.9 to 25.1)');
  });
  it('names the nearest test with the time at which it was made', () => {
    expect(read(nitrate, at(9))).toMatchObject({ text: '14.0 mg/L', tMs: at(5), testId: 'a' });
    expect(read(nitrate, at(40))).toMatchObject({ text: 'under 0.5 mg/L', tMs: at(30), testId: 'b' });
  });
  it('says that there is no test yet', () => {
    expect(read({ ...nitrate, tests: { shape: 'circle', dashed: false, points: [] } }, at(9))?.text).toBe('no test yet');
  });
  it("reads a day's dose with the plan, and hand doses apart", () => {
    expect(read(daily, at(3))?.text).toBe('6.0 mL, planned 6.3 a day');
    expect(read(daily, at(30))?.text).toBe('4.0 mL, 2.0 mL by hand, planned 6.3 a day');
    expect(read(daily, at(60))?.text).toBe('nothing given, planned 6.3 a day');
  });
  it('names a portion only near it', () => {
    const portions: LaneInput = {
      ...daily,
      doses: { per: 'portion', columns: [{ fromMs: at(10), toMs: at(10) + 1000, pumpMl: 0.5, handMl: 0 }], steps: [] },
    };
    expect(read(portions, at(10.4))).toMatchObject({ text: '0.5 mL', tMs: at(10) });
    expect(read(portions, at(12))?.text).toBe('no portion here');
  });
});

describe('laneSummary', () => {
  it('says in words what a lane shows', () => {
    expect(laneSummary(nitrate, range, 'UTC')).toBe('Nitrate, mg/L: 2 tests, from 14.0 on 1 June to under 0.5 on 2 June; aim 3 to 10.');
    expect(laneSummary(probe, range, 'UTC')).toBe('Temperature, °C: between 24.9 and 25.6, last 25.5, no data for 11 h in 1 gap.');
    expect(laneSummary(daily, range, 'UTC')).toBe(
      'Carbon, by day, mL: 10.0 mL by pump and 2.0 mL by hand in this range; planned last 6.3 mL a day.',
    );
  });
  it('says where there is nothing', () => {
    expect(laneSummary(nitrate, { fromMs: at(100), toMs: at(200) }, 'UTC')).toContain('no test in this range');
    expect(laneSummary(probe, { fromMs: at(100), toMs: at(200) }, 'UTC')).toContain('no data in this range');
  });
});

describe('laneTables', () => {
  it('lists tests newest first, with what is below detection and what was edited', () => {
    const [table] = laneTables(nitrate, range, 'Europe/Lisbon');
    expect(table?.rows.map((row) => row.cells)).toEqual([
      ['2 Jun 2026, 07:00', 'under 0.5', 'edited'],
      ['1 Jun 2026, 06:00', '14.0', ''],
    ]);
  });
  it('lists samples with gaps among them', () => {
    const [table] = laneTables(probe, range, 'UTC');
    expect(table?.caption).toBe('Sump, every sample');
    expect(table?.rows).toHaveLength(hours.length + 1);
    expect(table?.rows.filter((row) => row.cells[1] === 'no data 11 h')).toHaveLength(1);
  });
  it('lists buckets with least and most, and only those in sight', () => {
    const reduced = { ...probe, traces: [{ id: 't', label: 'Sump', dashed: false, columns: hourly([0, 1, 2, 300], hourMs) }] };
    const [table] = laneTables(reduced, range, 'UTC');
    expect(table?.columns.map((column) => column.title)).toEqual(['When', 'Mean, °C', 'Least', 'Most']);
    expect(table?.rows.filter((row) => !row.key.startsWith('gap'))).toHaveLength(3);
  });
  it('lists doses by day with their plan', () => {
    const [table] = laneTables(daily, range, 'UTC');
    expect(table?.rows.map((row) => row.cells)).toEqual([
      ['2 Jun 2026', '4.0', '2.0', '6.3'],
      ['1 Jun 2026', '6.0', '0.0', '6.3'],
    ]);
  });
});
