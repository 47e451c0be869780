import { describe, expect, it } from 'vitest';
import type { Reservoir } from '#shared/contract/rig.ts';
import type { System, SystemStatus } from '#shared/contract/systems.ts';
import type { Series } from '#shared/contract/telemetry.ts';
import { readHandDose } from '../../../components/watch/hand-dose-form.ts';
import {
  bottleRows,
  dueLines,
  firstChecklist,
  heardAtMs,
  heardWords,
  nutrientRows,
  probeRows,
  todayFigure,
} from '../../../components/watch/watch-model.ts';

const nowMs = Date.parse('2026-03-01T14:00:00Z');
const dayMs = 86_400_000;
const ago = (ms: number) => new Date(nowMs - ms).toISOString();
const id = '01900000-0000-7000-8000-000000000001';

const status: SystemStatus = {
  worstPriority: null,
  openAlarms: 0,
  unacknowledgedAlarms: 0,
  latched: false,
  stoppedHeads: 0,
  unconfirmedStops: 0,
  carbonHeads: 1,
  offlineDevices: 0,
  heardAt: ago(12_000),
  givenTodayMl: 3.5,
  plannedTodayMl: 6,
  plannedSoFarMl: 3.5,
  nitrate: { at: ago(2 * dayMs), canonicalMgPerL: 12, below: false },
  phosphate: { at: ago(2 * dayMs), canonicalMgPerL: 0.08, below: false },
};
const system: System = {
  id,
  siteId: id,
  siteName: 'Tern Lane',
  timeZone: 'Europe/Lisbon',
  role: 'keeper',
  name: 'Front window',
  displayLitres: 380,
  sumpLitres: 70,
  displacementLitres: 30,
  netLitres: 420,
  status,
};
const bottle = (rest: Partial<Reservoir> = {}): Reservoir => ({
  id,
  systemId: id,
  name: 'Carbon bottle',
  capacityMl: 500,
  levelSeriesId: null,
  lastRefill: null,
  remainingMl: 120,
  lastsUntil: new Date(nowMs + 8 * dayMs).toISOString(),
  ...rest,
});
const series = (rest: Partial<Series> = {}): Series => ({
  id,
  systemId: id,
  deviceId: id,
  channel: 'temperature',
  name: null,
  quantity: 'temperature',
  unit: 'degC',
  lastT: nowMs - 8000,
  lastValue: 25.24,
  conflicts: 0,
  ...rest,
});

describe('heard', () => {
  it('counts the newest of status and samples', () => {
    expect(heardWords(heardAtMs(status, [], nowMs), 'UTC', nowMs)).toBe('heard 12 s ago');
    expect(heardWords(heardAtMs(status, [series()], nowMs), 'UTC', nowMs)).toBe('heard 8 s ago');
  });
  it('does not believe a device whose clock runs ahead', () => {
    expect(heardAtMs(status, [series({ lastT: nowMs + 300_000 })], nowMs)).toBe(nowMs - 12_000);
  });
  it('says when no device was heard yet', () => {
    expect(heardWords(heardAtMs({ ...status, heardAt: null }, [], nowMs), 'UTC', nowMs)).toBe('no device heard yet');
  });
});

describe('todayFigure', () => {
  it('prefers the tape, which is live, over the status', () => {
    const tape = { fromT: 0, toT: 1, nowT: 0, slots: [], extras: [], givenMl: 4, plannedMl: 6, plannedSoFarMl: 3.5 };
    expect(todayFigure(status, tape)).toEqual({ figure: '4.0 of 6.0 mL', note: 'given today, 3.5 mL planned by now' });
    expect(todayFigure(status, undefined).figure).toBe('3.5 of 6.0 mL');
  });
  it('says that nothing is planned', () => {
    expect(todayFigure({ ...status, plannedTodayMl: null, givenTodayMl: 2 }, undefined)).toEqual({
      figure: '2.0 mL',
      note: 'given today, nothing is planned',
    });
  });
});

describe('nutrientRows', () => {
  it('says value, word and age', () => {
    expect(nutrientRows(status, nowMs)).toEqual([
      { nutrient: 'nitrate', name: 'Nitrate', value: '12 mg/L', word: 'above, aim 3 to 10', age: '2 days ago' },
      { nutrient: 'phosphate', name: 'Phosphate', value: '0.08 mg/L', word: 'in band', age: '2 days ago' },
    ]);
  });
  it('says that there is no test yet, and under where the kit cannot tell', () => {
    const rows = nutrientRows({ ...status, nitrate: null, phosphate: { at: ago(0), canonicalMgPerL: 0.02, below: true } }, nowMs);
    expect(rows[0]?.value).toBe('no test yet');
    expect(rows[1]).toMatchObject({ value: 'under 0.02 mg/L', word: 'below, aim 0.03 to 0.10' });
  });
});

describe('probeRows', () => {
  it('says how fresh each figure is', () => {
    expect(
      probeRows([series(), series({ lastT: nowMs - 3_600_000 }), series({ lastT: null, lastValue: null })], 'UTC', nowMs),
    ).toMatchObject([
      { value: '25.2 °C', age: '8 s ago', isOld: false },
      { age: '1 h ago', isOld: true },
      { value: 'no reading', age: 'never heard', isOld: true },
    ]);
  });
});

describe('what follows from probes', () => {
  const water = [
    series({ id: 't', lastValue: 25, lastT: nowMs - 60_000 }),
    series({ id: 'c', quantity: 'conductivity', channel: 'conductivity', lastValue: 53, lastT: nowMs - 120_000 }),
    series({ id: 'o', quantity: 'oxygen-percent', channel: 'oxygen', lastValue: 95 }),
  ];

  it('is salinity, after conductivity, as fresh as the older reading', () => {
    const rows = probeRows(water, 'UTC', nowMs);
    expect(rows.map((row) => row.name)).toEqual(['Temperature', 'Conductivity', 'Salinity', 'Oxygen saturation']);
    expect(rows[2]).toMatchObject({ value: '34.9, computed', age: '2 min ago', isOld: false });
  });
  it('is oxygen in mg/L beside its per cent, where salinity is known', () => {
    expect(probeRows(water, 'UTC', nowMs)[3]?.value).toBe('95 %, 6.4 mg/L');
    expect(probeRows(water.slice(2), 'UTC', nowMs)[0]?.value).toBe('95 %');
  });
});

describe('bottleRows', () => {
  it.each([
    [{}, '120 mL left', 'lasts to 9 March'],
    [{ remainingMl: null, lastsUntil: null }, 'no refill written down', ''],
    [{ remainingMl: -3 }, '0.0 mL left', 'should be empty'],
    [{ lastsUntil: null }, '120 mL left', 'nothing draws from it'],
  ])('tells of %j', (rest, left, lasts) => {
    expect(bottleRows([bottle(rest)], 'UTC', nowMs)[0]).toMatchObject({ left, lasts });
  });
});

describe('dueLines', () => {
  const old = { at: ago(9 * dayMs), canonicalMgPerL: 12, below: false };
  const words = (changed: Partial<SystemStatus>, bottles: Reservoir[] = []) =>
    dueLines({ ...status, ...changed }, bottles, 'UTC', nowMs).map((line) => line.words);

  it('is silent while nothing is due', () => {
    expect(words({}, [bottle()])).toEqual([]);
  });
  it('asks for what was not tested for a week', () => {
    expect(words({ nitrate: old })).toEqual(['Test nitrate, last tested 9 days ago']);
    expect(words({ nitrate: old, phosphate: old })).toEqual(['Test both nutrients, last tested 9 days ago']);
    expect(words({ nitrate: old, phosphate: null })).toEqual(['Test both nutrients']);
  });
  it('asks for no test where nothing is dosed', () => {
    expect(words({ nitrate: old, plannedTodayMl: null, givenTodayMl: 0 })).toEqual([]);
  });
  it('asks for a refill with under three days left, first', () => {
    const low = bottle({ lastsUntil: new Date(nowMs + 2 * dayMs).toISOString() });
    expect(words({ nitrate: old }, [low])).toEqual(['Carbon bottle lasts to 3 March: refill it', 'Test nitrate, last tested 9 days ago']);
  });
  it('says at most three', () => {
    const low = bottle({ lastsUntil: new Date(nowMs + dayMs).toISOString() });
    expect(
      words(
        { nitrate: old },
        [1, 2, 3, 4].map((n) => ({ ...low, id: `${id}${n}` })),
      ),
    ).toHaveLength(3);
  });
});

describe('firstChecklist', () => {
  const facts = { system, hasHandDose: false, hasLimit: true };

  it('goes away once all four are done', () => {
    expect(firstChecklist(facts)).toBeNull();
  });
  it('keeps all four lines while one is missing', () => {
    const lines = firstChecklist({ ...facts, hasLimit: false });
    expect(lines?.map((line) => line.isDone)).toEqual([true, true, true, false]);
  });
  it('takes a dose by hand for a source', () => {
    const byHand = { ...system, status: { ...status, carbonHeads: 0 } };
    expect(firstChecklist({ ...facts, system: byHand })?.[2]?.isDone).toBe(false);
    expect(firstChecklist({ ...facts, system: byHand, hasHandDose: true })).toBeNull();
  });
  it('makes room for an alarm', () => {
    const inAlarm = { ...system, status: { ...status, openAlarms: 1 } };
    expect(firstChecklist({ ...facts, system: inAlarm, hasLimit: false })).toBeNull();
  });
  it('asks for a test of both', () => {
    expect(firstChecklist({ ...facts, system: { ...system, status: { ...status, phosphate: null } } })?.[1]?.isDone).toBe(false);
  });
});

describe('readHandDose', () => {
  const read = (rest: Partial<Parameters<typeof readHandDose>[0]>) =>
    readHandDose({ productId: id, ml: '2,5', at: '', ...rest }, 'Europe/Lisbon', nowMs);

  it('reads a decimal comma, and takes now for an empty time', () => {
    expect(read({})).toEqual({ ok: true, body: { productId: id, ml: 2.5, at: '2026-03-01T14:00:00.000+00:00' } });
  });
  it("reads the time in the site's zone", () => {
    expect(readHandDose({ productId: id, ml: '1', at: '2026-02-28T09:30' }, 'America/New_York', nowMs)).toMatchObject({
      body: { at: '2026-02-28T09:30:00.000-05:00' },
    });
  });
  it.each([
    [{ ml: '' }, { ml: 'Give the mL' }],
    [{ ml: '0' }, { ml: 'Give mL above 0' }],
    [{ ml: '-1' }, { ml: 'Give mL above 0' }],
    [{ productId: '' }, { productId: 'Choose what was dosed' }],
    [{ at: 'yesterday' }, { at: 'Give the day and time' }],
    [{ at: '2026-03-02T09:00' }, { at: 'A dose that was given cannot lie in the future' }],
  ])('refuses %j in words', (rest, errors) => {
    expect(read(rest)).toEqual({ ok: false, errors });
  });
});
