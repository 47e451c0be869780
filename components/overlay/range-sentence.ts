import { DateTime } from 'luxon';
import { formatNumber } from '../../lib/format/number.ts';
import type { DoseInput } from '../charts/dose-bars.ts';
import type { LaneInput } from '../charts/lane-model.ts';
import type { TimeRange } from '../charts/time-axis.ts';

function testPart(lane: LaneInput, range: TimeRange): string {
  const name = lane.title.toLowerCase();
  const seen = (lane.tests?.points ?? []).filter((point) => point.tMs >= range.fromMs && point.tMs <= range.toMs);
  const say = (point: { value: number; below: boolean }) => `${point.below ? 'under ' : ''}${formatNumber(point.value, lane.decimals)}`;
  const first = seen[0];
  const last = seen.at(-1);
  if (!first || !last) return `no ${name} test`;
  return seen.length === 1 ? `${name} ${say(first)} (one test)` : `${name} ${say(first)} to ${say(last)}`;
}

function dosePart(doses: DoseInput | null, range: TimeRange): string {
  const ml = (doses?.columns ?? [])
    .filter((column) => column.toMs > range.fromMs && column.fromMs < range.toMs)
    .reduce((sum, column) => sum + column.pumpMl + column.handMl, 0);
  return ml === 0 ? 'nothing given' : `${formatNumber(ml, ml < 100 ? 1 : 0)} mL given`;
}

function rangeWords(range: TimeRange, zone: string): string {
  const from = DateTime.fromMillis(range.fromMs, { zone });
  const to = DateTime.fromMillis(range.toMs, { zone });
  if (from.hasSame(to, 'day')) return `${from.toFormat('d LLLL, HH:mm')} to ${to.toFormat('HH:mm')}`;
  const isShort = range.toMs - range.fromMs < 3 * 86_400_000;
  const format = isShort ? 'd LLLL, HH:mm' : from.year === to.year ? 'd LLLL' : 'd LLLL yyyy';
  return `${from.toFormat(format)} to ${to.toFormat(format)}`;
}

/** "Last 7 days: nitrate 14 to 11, phosphate 0.12 to 0.09, 42.0 mL given." */
export function rangeSentence(
  words: string | null,
  range: TimeRange,
  zone: string,
  nutrients: readonly LaneInput[],
  dose: LaneInput,
): string {
  const parts = [...nutrients.map((lane) => testPart(lane, range)), dosePart(dose.doses, range)];
  return `${words ?? rangeWords(range, zone)}: ${parts.join(', ')}.`;
}
