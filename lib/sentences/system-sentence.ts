import type { System, SystemStatus } from '#shared/contract/systems.ts';
import { pullThePlug } from '../codes/order-words.ts';
import { formatMl, formatMlOf } from '../format/millilitres.ts';
import { defaultBands, formatBand, formatNutrient, nutrientNames, placeInBand, type Nutrient } from '../format/nutrient.ts';
import { ageWords, formatNear } from '../format/time.ts';

const dayMs = 86_400_000;

/** A test older than this says so: the landing asks for one a week, and a tread for one on each of two weeks. */
const oldTestMs = 14 * dayMs;

/** Given and planned are "as planned" within this share of the day's dose: a portion that is due is still being reported. */
const asPlannedShare = 0.1;
const asPlannedLeastMl = 0.1;

/** The part about what was given today. */
export function doseSentence(status: SystemStatus): string {
  const { givenTodayMl: givenMl, plannedTodayMl: plannedMl, plannedSoFarMl: soFarMl } = status;
  if (plannedMl === null || plannedMl === 0) {
    if (givenMl > 0) return `${formatMl(givenMl)} given today; nothing is planned.`;
    return status.carbonHeads === 0 ? 'No carbon pump yet.' : 'No dose is planned.';
  }
  const given = `${formatMlOf(givenMl, plannedMl)} given so far`;
  if (soFarMl === null) return `${given}.`;
  const differenceMl = givenMl - soFarMl;
  const toleranceMl = Math.max(asPlannedShare * plannedMl, asPlannedLeastMl);
  if (Math.abs(differenceMl) <= toleranceMl) return `${given}, as planned.`;
  return `${given}, ${formatMl(Math.abs(differenceMl))} ${differenceMl > 0 ? 'more' : 'less'} than planned by now.`;
}

function nutrientSentence(nutrient: Nutrient, status: SystemStatus, nowMs: number): string {
  const latest = status[nutrient];
  if (latest === null) return `No ${nutrient} test yet.`;
  const band = defaultBands[nutrient];
  const place = placeInBand(latest.canonicalMgPerL, latest.below, band);
  const figure = `${nutrientNames[nutrient]} ${formatNutrient(nutrient, latest.canonicalMgPerL, latest.below)}`;
  const ageMs = nowMs - Date.parse(latest.at);
  const age = ageMs > oldTestMs ? `, tested ${ageWords(ageMs)} ago` : '';
  return place === 'in band' ? `${figure}, in band${age}.` : `${figure}, aim ${formatBand(nutrient, band)}${age}.`;
}

/** The part about the two nutrients. */
export function nutrientsSentence(status: SystemStatus, nowMs: number): string {
  if (status.nitrate === null && status.phosphate === null) return 'No test yet.';
  return `${nutrientSentence('nitrate', status, nowMs)} ${nutrientSentence('phosphate', status, nowMs)}`;
}

/** A stop is said as one only when the pumps have said so themselves. */
function stoppedSentence(status: SystemStatus): string | null {
  if (status.stoppedHeads === 0) return null;
  if (status.unconfirmedStops > 0) {
    const asked = `Dosing is asked to stop${status.latched ? ' by an alarm' : ''}`;
    const silent = status.unconfirmedStops < status.stoppedHeads ? `${status.unconfirmedStops} of ${status.stoppedHeads} heads are` : null;
    return `${asked}; ${silent === null ? 'the pump has not confirmed it' : `${silent} not confirmed`}. ${pullThePlug}`;
  }
  const all = status.stoppedHeads >= status.carbonHeads;
  const what = all ? 'Dosing is stopped' : `${status.stoppedHeads} of ${status.carbonHeads} carbon heads are stopped`;
  return status.latched ? `${what} by an alarm.` : `${what}.`;
}

function alarmSentence(status: SystemStatus): string | null {
  if (status.worstPriority === null || status.openAlarms === 0) return null;
  if (status.openAlarms === 1) return status.worstPriority === 'urgent' ? 'One urgent alarm.' : 'One alarm.';
  return status.worstPriority === 'urgent' ? `${status.openAlarms} alarms, at least one urgent.` : `${status.openAlarms} alarms.`;
}

/** Since when this page cannot tell: null while data is fresh. */
export type StaleSince = number | null;

/**
 * The one sentence that opens a system, made from its status: what is wrong first, then the dose, then the nutrients.
 * Stale data is never said as if it were fresh.
 */
export function systemSentence(system: System, nowMs: number, staleSinceMs: StaleSince): string {
  if (staleSinceMs !== null) {
    return `We can't tell since ${formatNear(staleSinceMs, system.timeZone, nowMs)}. The pump keeps its own schedule.`;
  }
  const { status } = system;
  const away =
    status.offlineDevices > 0
      ? `${status.offlineDevices === 1 ? 'One device is' : `${status.offlineDevices} devices are`} not heard; a pump keeps its own schedule.`
      : null;
  const parts = [alarmSentence(status), stoppedSentence(status), away, doseSentence(status), nutrientsSentence(status, nowMs)];
  return parts.filter((part) => part !== null).join(' ');
}
