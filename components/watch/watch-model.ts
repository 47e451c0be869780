import { quantities, type Series, type Tape } from '#shared/contract/telemetry.ts';
import { oxygenMgPerLOfPercent } from '#shared/domain/oxygen-saturation.ts';
import type { Reservoir } from '#shared/contract/rig.ts';
import type { System, SystemStatus } from '#shared/contract/systems.ts';
import { formatMl, formatMlOf } from '../../lib/format/millilitres.ts';
import { defaultBands, formatBand, formatNutrient, nutrientNames, placeInBand, type Nutrient } from '../../lib/format/nutrient.ts';
import { formatNumber } from '../../lib/format/number.ts';
import { formatSeriesValue, seriesNameAmong } from '../../lib/format/series-value.ts';
import { ageWords, formatAgo, formatDay } from '../../lib/format/time.ts';
import { isSameWater, latestSalinity, type LatestSalinity } from '../../lib/salinity.ts';

const minuteMs = 60_000;
const dayMs = 1440 * minuteMs;
const nutrients: readonly Nutrient[] = ['nitrate', 'phosphate'];

/** The newest that any device of the system said, by its status or by a sample that came since. */
export function heardAtMs(status: SystemStatus, series: readonly Series[], nowMs: number): number | null {
  const times = [
    ...(status.heardAt === null ? [] : [Date.parse(status.heardAt)]),
    // A device whose clock runs ahead is not heard in the future.
    ...series.flatMap((one) => (one.lastT === null || one.lastT > nowMs + minuteMs ? [] : [one.lastT])),
  ];
  return times.length === 0 ? null : Math.max(...times);
}

/** "heard 12 s ago" */
export function heardWords(heardMs: number | null, timeZone: string, nowMs: number): string {
  return heardMs === null ? 'no device heard yet' : `heard ${formatAgo(heardMs, timeZone, nowMs)}`;
}

/** Today's one figure, and what stands under it. */
export function todayFigure(status: SystemStatus, tape: Tape | undefined): { figure: string; note: string } {
  const givenMl = tape?.givenMl ?? status.givenTodayMl;
  const plannedMl = tape?.plannedMl ?? status.plannedTodayMl ?? 0;
  const soFarMl = tape?.plannedSoFarMl ?? status.plannedSoFarMl ?? 0;
  if (plannedMl === 0) return { figure: formatMl(givenMl), note: 'given today, nothing is planned' };
  return { figure: formatMlOf(givenMl, plannedMl), note: `given today, ${formatMl(soFarMl)} planned by now` };
}

export interface NutrientRow {
  readonly nutrient: Nutrient;
  readonly name: string;
  readonly value: string;
  /** "above band, aim 3 to 10", "in band", or that there is no test. */
  readonly word: string;
  readonly age: string;
}

export function nutrientRows(status: SystemStatus, nowMs: number): NutrientRow[] {
  return nutrients.map((nutrient) => {
    const latest = status[nutrient];
    const name = nutrientNames[nutrient];
    if (latest === null) return { nutrient, name, value: 'no test yet', word: `aim ${formatBand(nutrient)}`, age: '' };
    const place = placeInBand(latest.canonicalMgPerL, latest.below, defaultBands[nutrient]);
    return {
      nutrient,
      name,
      value: `${formatNutrient(nutrient, latest.canonicalMgPerL, latest.below)} mg/L`,
      word: place === 'in band' ? 'in band' : `${place}, aim ${formatBand(nutrient)}`,
      age: `${ageWords(nowMs - Date.parse(latest.at))} ago`,
    };
  });
}

export interface ProbeRow {
  readonly id: string;
  readonly name: string;
  readonly value: string;
  readonly age: string;
  /** Not heard for a while: shown soft, with its time. */
  readonly isOld: boolean;
}

/** A probe that reports each 5 minutes has missed one report. */
const oldProbeMs = 10 * minuteMs;

/** In the order in which quantities are known, those that nobody named last; it never changes with the values. */
function byQuantity(a: Series, b: Series): number {
  const place = (one: Series) => (one.quantity === null ? quantities.length : quantities.indexOf(one.quantity));
  return place(a) - place(b) || a.channel.localeCompare(b.channel);
}

function freshness(atMs: number | null, timeZone: string, nowMs: number): Pick<ProbeRow, 'age' | 'isOld'> {
  return { age: atMs === null ? 'never heard' : formatAgo(atMs, timeZone, nowMs), isOld: atMs === null || nowMs - atMs > oldProbeMs };
}

/** `95 %, 6.4 mg/L`: per cent of saturation says nothing of how much there is to breathe, so that it is converted where it can be. */
function probeValue(one: Series, salinity: LatestSalinity | null): string {
  const said = formatSeriesValue(one, one.lastValue);
  if (one.quantity !== 'oxygen-percent' || one.lastValue === null || salinity === null || !isSameWater(one, salinity)) return said;
  const mgPerL = oxygenMgPerLOfPercent(one.lastValue, salinity.salinity, salinity.temperatureC);
  return mgPerL === null ? said : `${said}, ${formatNumber(mgPerL, 1)} mg/L`;
}

/** Each series with its newest value, and after conductivity the salinity that follows from it. */
export function probeRows(series: readonly Series[], timeZone: string, nowMs: number): ProbeRow[] {
  const sorted = [...series].sort(byQuantity);
  const salinity = latestSalinity(series);
  const rows = sorted.map((one) => ({
    id: one.id,
    name: seriesNameAmong(one, series),
    value: probeValue(one, salinity),
    ...freshness(one.lastT, timeZone, nowMs),
  }));
  if (salinity === null) return rows;
  const value = `${formatNumber(salinity.salinity, 1)}, computed`;
  const place = sorted.findLastIndex((one) => one.quantity === 'conductivity') + 1;
  return rows.toSpliced(place, 0, { id: 'salinity', name: 'Salinity', value, ...freshness(salinity.atMs, timeZone, nowMs) });
}

export interface BottleRow {
  readonly id: string;
  readonly name: string;
  readonly left: string;
  /** "lasts to 9 March" */
  readonly lasts: string;
}

export function bottleRows(reservoirs: readonly Reservoir[], timeZone: string, nowMs: number): BottleRow[] {
  return reservoirs.map((bottle) => ({
    id: bottle.id,
    name: bottle.name,
    left: bottle.remainingMl === null ? 'no refill written down' : `${formatMl(Math.max(0, bottle.remainingMl))} left`,
    lasts: lastsWords(bottle, timeZone, nowMs),
  }));
}

function lastsWords(bottle: Reservoir, timeZone: string, nowMs: number): string {
  if (bottle.remainingMl === null) return '';
  if (bottle.remainingMl <= 0) return 'should be empty';
  if (bottle.lastsUntil === null) return 'nothing draws from it';
  return `lasts to ${formatDay(bottle.lastsUntil, timeZone, nowMs)}`;
}

const testDueMs = 7 * dayMs;
const bottleDueMs = 3 * dayMs;
const mostDueLines = 3;

export interface DueLine {
  readonly key: string;
  readonly words: string;
  readonly place: 'tests' | 'rig';
}

/** What is due now, the most pressing first, at most three. Tests are due only while something is dosed. */
export function dueLines(status: SystemStatus, reservoirs: readonly Reservoir[], timeZone: string, nowMs: number): DueLine[] {
  const bottles = reservoirs
    .filter((bottle) => bottle.lastsUntil !== null && Date.parse(bottle.lastsUntil) - nowMs < bottleDueMs)
    .map((bottle): DueLine => ({
      key: bottle.id,
      words: `${bottle.name} ${lastsWords(bottle, timeZone, nowMs)}: refill it`,
      place: 'rig',
    }));
  const isDosing = (status.plannedTodayMl ?? 0) > 0 || status.givenTodayMl > 0;
  const overdue = nutrients.filter((nutrient) => {
    const latest = status[nutrient];
    return isDosing && (latest === null || nowMs - Date.parse(latest.at) > testDueMs);
  });
  return [...bottles, ...testLine(overdue, status, nowMs)].slice(0, mostDueLines);
}

function testLine(overdue: readonly Nutrient[], status: SystemStatus, nowMs: number): DueLine[] {
  const [first] = overdue;
  if (first === undefined) return [];
  const names = overdue.length === 2 ? 'both nutrients' : first;
  const dates = overdue.flatMap((nutrient) => {
    const latest = status[nutrient];
    return latest === null ? [] : [Date.parse(latest.at)];
  });
  const since = dates.length === overdue.length ? `, last tested ${ageWords(nowMs - Math.max(...dates))} ago` : '';
  return [{ key: 'tests', words: `Test ${names}${since}`, place: 'tests' }];
}

export interface CheckLine {
  readonly key: 'litres' | 'tests' | 'source' | 'limit';
  readonly words: string;
  readonly isDone: boolean;
}

export interface FirstFacts {
  readonly system: System;
  readonly hasHandDose: boolean;
  /** A volume limit that holds now, by number or by the schedule. */
  readonly hasLimit: boolean;
}

/** The first minutes of a system; null once all four lines are done, and while an alarm is open: that comes first. */
export function firstChecklist({ system, hasHandDose, hasLimit }: FirstFacts): CheckLine[] | null {
  const { status } = system;
  if (status.openAlarms > 0) return null;
  const lines: CheckLine[] = [
    { key: 'litres', words: 'Litres of water', isDone: system.netLitres > 0 },
    { key: 'tests', words: 'A test of nitrate and one of phosphate', isDone: status.nitrate !== null && status.phosphate !== null },
    { key: 'source', words: 'A dose source: a pump, or your hand', isDone: status.carbonHeads > 0 || hasHandDose },
    { key: 'limit', words: 'A limit on the dose', isDone: hasLimit },
  ];
  return lines.every((line) => line.isDone) ? null : lines;
}
