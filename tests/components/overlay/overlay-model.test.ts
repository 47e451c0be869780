import { describe, expect, it } from 'vitest';
import type { HandDose, Test } from '#shared/contract/records.ts';
import type { Points, Quantity, Run, Series } from '#shared/contract/telemetry.ts';
import { laneModel } from '../../../components/charts/lane-model.ts';
import { dosesByDay, dosesByPortion } from '../../../components/overlay/dose-days.ts';
import { doseLane, showsPortions } from '../../../components/overlay/dose-lane.ts';
import { fetchWindow, pointCount } from '../../../components/overlay/fetch-window.ts';
import { nutrientLane } from '../../../components/overlay/nutrient-lane.ts';
import { groupProbes, probeLane } from '../../../components/overlay/probe-lanes.ts';
import { salinityColumns } from '../../../components/overlay/salinity-lane.ts';
import { rangeSentence } from '../../../components/overlay/range-sentence.ts';

const hourMs = 3_600_000;
const dayMs = 24 * hourMs;
const fromMs = Date.parse('2026-06-01T00:00:00Z');
const range = { fromMs, toMs: fromMs + 7 * dayMs };
const id = '01900000-0000-7000-8000-000000000001';
const iso = (ms: number) => new Date(ms).toISOString();

const test = (day: number, quantity: Test['quantity'], canonicalMgPerL: number, rest: Partial<Test> = {}): Test => ({
  id: `${quantity} ${day}`,
  systemId: id,
  at: iso(fromMs + day * dayMs),
  quantity,
  value: canonicalMgPerL,
  unit: 'mg/L NO3',
  below: false,
  canonicalMgPerL,
  note: '',
  by: 'Keeper',
  byId: id,
  edited: false,
  ...rest,
});
const run = (rest: Partial<Run> = {}): Run => ({
  id: 'run',
  deviceId: id,
  headId: id,
  head: 1,
  kind: 'carbon',
  beganAt: iso(fromMs + 9 * hourMs),
  endedAt: iso(fromMs + 9 * hourMs + 600),
  ml: 0.5,
  cause: 'schedule',
  dueAt: null,
  interrupted: false,
  flags: [],
  ...rest,
});
const handDose: HandDose = { id, systemId: id, productId: id, at: iso(fromMs + 10 * hourMs), ml: 2, by: 'Keeper' };

describe('fetchWindow', () => {
  it('reaches beyond the range on both sides, without asking for much more', () => {
    for (const spanMs of [600_000, dayMs, 7 * dayMs, 365 * dayMs]) {
      const window = fetchWindow({ fromMs, toMs: fromMs + spanMs });
      expect(window.fromMs).toBeLessThan(fromMs);
      expect(window.toMs).toBeGreaterThan(fromMs + spanMs);
      if (spanMs >= dayMs) expect(window.toMs - window.fromMs).toBeLessThanOrEqual(2.5 * spanMs);
    }
  });
  it('stays the same while the range moves a little, so that the answer is in the cache', () => {
    const by = (ms: number) => fetchWindow({ fromMs: range.fromMs + ms, toMs: range.toMs + ms });
    expect(by(12 * hourMs)).toEqual(by(10 * hourMs));
  });
});

describe('pointCount', () => {
  it('asks for one point a day where a day is a few pixels wide', () => {
    expect(pointCount(range)).toBe(2000);
    const year = { fromMs, toMs: fromMs + 365 * dayMs };
    const window = fetchWindow(year);
    expect((window.toMs - window.fromMs) / pointCount(year)).toBeCloseTo(dayMs, -6);
  });
});

describe('dosesByDay', () => {
  const buckets = (t: number[], pumpMl: number[]) => ({ resolutionMs: hourMs, t, pumpMl, handMl: t.map(() => 0), planned: [] });

  it("adds up by the site's days, not by UTC's", () => {
    // 18:30 UTC is midnight in Kolkata.
    const t = [Date.parse('2026-06-01T17:30:00Z'), Date.parse('2026-06-01T18:30:00Z'), Date.parse('2026-06-02T04:30:00Z')];
    const days = dosesByDay(buckets(t, [1, 2, 4]), 'Asia/Kolkata');
    expect(days.map((day) => [iso(day.fromMs), day.pumpMl])).toEqual([
      ['2026-05-31T18:30:00.000Z', 1],
      ['2026-06-01T18:30:00.000Z', 6],
    ]);
  });
  it('makes the days on which the clock changes 23 and 25 hours long', () => {
    const t = [Date.parse('2026-03-29T12:00:00Z'), Date.parse('2026-10-25T12:00:00Z')];
    expect(dosesByDay(buckets(t, [1, 1]), 'Europe/Lisbon').map((day) => (day.toMs - day.fromMs) / hourMs)).toEqual([23, 25]);
  });
});

describe('dosesByPortion', () => {
  it('takes carbon only, and hand doses apart', () => {
    const columns = dosesByPortion([run(), run({ id: 'b', kind: 'other' }), run({ id: 'c', ml: 0 })], [handDose]);
    expect(columns.map((column) => [column.pumpMl, column.handMl])).toEqual([
      [0.5, 0],
      [0, 2],
    ]);
  });
  it('gives a run that has not ended a place', () => {
    const [column] = dosesByPortion([run({ endedAt: null })], []);
    expect(column?.toMs).toBeGreaterThan(column?.fromMs ?? Infinity);
  });
});

describe('doseLane', () => {
  const doses = { resolutionMs: hourMs, t: [fromMs + 9 * hourMs], pumpMl: [6], handMl: [0], planned: [{ fromT: fromMs, mlPerDay: 6.3 }] };

  it('shows portions up to three days, and days beyond', () => {
    expect(showsPortions({ fromMs, toMs: fromMs + 3 * dayMs })).toBe(true);
    expect(showsPortions(range)).toBe(false);
    expect(doseLane({ doses, runs: [run()], handDoses: [] }, true, 'UTC')).toMatchObject({
      title: 'Carbon, by portion',
      doses: { per: 'portion' },
    });
    expect(doseLane({ doses, runs: [run()], handDoses: [] }, false, 'UTC').doses).toMatchObject({ per: 'day', steps: [{ mlPerDay: 6.3 }] });
  });
  it('shows days until the portions are here', () => {
    expect(doseLane({ doses, runs: undefined, handDoses: [] }, true, 'UTC').doses?.per).toBe('day');
  });
  it('is empty, not broken, before anything is here', () => {
    expect(doseLane({ doses: undefined, runs: undefined, handDoses: [] }, false, 'UTC').doses).toEqual({
      per: 'day',
      columns: [],
      steps: [],
    });
  });
});

describe('nutrientLane', () => {
  it('lays the tests of one nutrient over its band, as the ion', () => {
    const lane = nutrientLane('nitrate', [test(2, 'nitrate', 11), test(1, 'nitrate', 14), test(1, 'phosphate', 0.1)]);
    expect(lane.band).toEqual({ low: 3, high: 10, label: 'aim 3 to 10' });
    expect(lane.tests?.points.map((point) => point.value)).toEqual([14, 11]);
    expect(lane.decimals).toBe(0);
  });
  it('shows a decimal where a result has one', () => {
    expect(nutrientLane('nitrate', [test(1, 'nitrate', 4.43)]).decimals).toBe(1);
    expect(nutrientLane('phosphate', [])).toMatchObject({
      decimals: 2,
      band: { label: 'aim 0.03 to 0.10' },
      tests: { shape: 'square', dashed: true },
    });
  });
});

describe('groupProbes', () => {
  const series = (name: string, quantity: Quantity | null, unit: string): Series => ({
    id: name,
    systemId: id,
    deviceId: id,
    channel: name,
    name: null,
    quantity,
    unit,
    lastT: null,
    lastValue: null,
    conflicts: 0,
  });

  it('makes one lane a kind of quantity, in a fixed order, with what is seldom looked at folded', () => {
    const groups = groupProbes([
      series('p', 'power', 'W'),
      series('a', 'ph', 'pH'),
      series('t1', 'temperature', 'degC'),
      series('t2', 'temperature', 'degC'),
    ]);
    expect(groups.map((group) => [group.title, group.series.length, group.folded])).toEqual([
      ['Temperature', 2, false],
      ['pH', 1, false],
      ['Power', 1, true],
    ]);
  });
  it('puts at most three series into a lane', () => {
    const groups = groupProbes(['a', 'b', 'c', 'd'].map((name) => series(name, 'temperature', 'degC')));
    expect(groups.map((group) => [group.title, group.series.length])).toEqual([
      ['Temperature (1 of 2)', 3],
      ['Temperature (2 of 2)', 1],
    ]);
  });
  it('gives each series that nobody named a folded lane of its own', () => {
    const groups = groupProbes([series('x', null, 'lx'), series('y', null, 'lx')]);
    expect(groups.map((group) => [group.title, group.unit, group.folded])).toEqual([
      ['x', 'lx', true],
      ['y', 'lx', true],
    ]);
  });
  it('adds a lane of salinity where conductivity and temperature are measured', () => {
    const both = [series('c', 'conductivity', 'mS/cm'), series('t', 'temperature', 'degC')];
    const salinity = groupProbes(both).at(-1);
    expect(salinity).toMatchObject({ title: 'Salinity, computed', folded: true });
    const points = (mean: number[]): Points => ({ resolutionMs: 0, t: [1], min: mean, mean, max: mean, count: [1] });
    const lane =
      salinity &&
      probeLane(
        salinity,
        new Map([
          ['c', points([42.914])],
          ['t', points([15])],
        ]),
      );
    expect(lane?.traces[0]?.columns.mean[0]).toBeCloseTo(35, 2);
    expect(groupProbes(both.slice(1)).map((group) => group.title)).toEqual(['Temperature']);
  });
  it('draws a lane before its points are here', () => {
    const [group] = groupProbes([series('t', 'temperature', 'degC')]);
    const lane = group && probeLane(group, new Map());
    expect(lane?.traces.map((trace) => trace.columns.t)).toEqual([[]]);
  });
  it('tells the second series of a lane by its dashes', () => {
    const points: Points = { resolutionMs: 0, t: [1], min: [25], mean: [25], max: [25], count: [1] };
    const [group] = groupProbes([series('t1', 'temperature', 'degC'), series('t2', 'temperature', 'degC')]);
    const lane = group && probeLane(group, new Map([['t1', points]]));
    expect(lane?.traces.map((trace) => [trace.dashed, trace.columns.t.length])).toEqual([
      [false, 1],
      [true, 0],
    ]);
  });
});

describe('rangeSentence', () => {
  const tests = [
    test(1, 'nitrate', 14),
    test(6, 'nitrate', 11),
    test(1, 'phosphate', 0.12),
    test(6, 'phosphate', 0.09),
    test(30, 'nitrate', 99),
  ];
  const nutrients = [nutrientLane('nitrate', tests), nutrientLane('phosphate', tests)];
  const dose = doseLane(
    { doses: { resolutionMs: hourMs, t: [fromMs + 9 * hourMs], pumpMl: [41], handMl: [1], planned: [] }, runs: undefined, handDoses: [] },
    false,
    'UTC',
  );

  it('says how both nutrients went and what was given', () => {
    expect(rangeSentence('Last 7 days', range, 'UTC', nutrients, dose)).toBe(
      'Last 7 days: nitrate 14 to 11, phosphate 0.12 to 0.09, 42.0 mL given.',
    );
  });
  it('names the range where it is no preset', () => {
    expect(rangeSentence(null, range, 'UTC', nutrients, dose)).toMatch(/^1 June to 8 June: /);
    expect(rangeSentence(null, { fromMs, toMs: fromMs + 6 * hourMs }, 'UTC', nutrients, dose)).toMatch(/^1 June, 00:00 to 06:00: /);
  });
  it('says what there is none of, and under where the kit could not tell', () => {
    const later = { fromMs: fromMs + 100 * dayMs, toMs: fromMs + 107 * dayMs };
    expect(rangeSentence(null, later, 'UTC', nutrients, dose)).toBe(
      '9 September to 16 September: no nitrate test, no phosphate test, nothing given.',
    );
    const below = nutrientLane('phosphate', [test(1, 'phosphate', 0.02, { below: true })]);
    expect(rangeSentence('Last 7 days', range, 'UTC', [below], dose)).toBe('Last 7 days: phosphate under 0.02 (one test), 42.0 mL given.');
  });
});

describe('salinityColumns', () => {
  const columns = (t: number[], mean: number[], resolutionMs = 60_000) => ({
    resolutionMs,
    t,
    min: mean,
    mean,
    max: mean,
    count: t.map(() => 2),
  });

  it('joins what is of the same time, and leaves out a probe in air', () => {
    const joined = salinityColumns(columns([1, 2, 3], [42.914, 0, 42.914]), columns([2, 3, 4], [15, 15, 15]));
    expect(joined.t).toEqual([3]);
    expect(joined.mean[0]).toBeCloseTo(35, 2);
    expect(joined.count).toEqual([2]);
  });
  it('joins nothing of buckets of another width', () => {
    expect(salinityColumns(columns([1], [42.914]), columns([1], [15], 900_000)).t).toEqual([]);
  });
});

describe('a lane without tests', () => {
  const frame = { range, zone: 'UTC', widthPx: 400, heightPx: 96, remPx: 16 };
  const words = (tests: readonly Test[] | undefined) => laneModel(nutrientLane('nitrate', tests), frame).emptyWords;

  it('says so, once it is known that there is none', () => {
    expect([words([]), words([test(1, 'nitrate', 5)]), words(undefined)]).toEqual(['no test yet', null, null]);
  });
});
