import { DateTime } from 'luxon';
import { formatNumber } from '../../lib/format/number.ts';
import { spanWords, splitAtGaps } from './gaps.ts';
import type { LaneInput } from './lane-model.ts';
import type { TimeRange } from './time-axis.ts';
import type { TraceInput } from './trace-model.ts';

function testSentence(lane: LaneInput, range: TimeRange, zone: string): string {
  const seen = (lane.tests?.points ?? [])
    .filter((point) => point.tMs >= range.fromMs && point.tMs <= range.toMs)
    .sort((a, b) => a.tMs - b.tMs);
  const first = seen[0];
  const last = seen.at(-1);
  if (!first || !last) return lane.tests?.points.length === 0 ? 'no test yet' : 'no test in this range';
  const say = (point: typeof first) => `${point.below ? 'under ' : ''}${formatNumber(point.value, lane.decimals)}`;
  const day = (tMs: number) => DateTime.fromMillis(tMs, { zone }).toFormat('d LLLL');
  if (seen.length === 1) return `one test, ${say(first)} on ${day(first.tMs)}`;
  return `${seen.length} tests, from ${say(first)} on ${day(first.tMs)} to ${say(last)} on ${day(last.tMs)}`;
}

function traceSentence(lane: LaneInput, trace: TraceInput, range: TimeRange): string {
  const { columns } = trace;
  const seen = columns.t.flatMap((tMs, i) => (tMs + columns.resolutionMs >= range.fromMs && tMs <= range.toMs ? [i] : []));
  const name = lane.traces.length > 1 ? `${trace.label} ` : '';
  const last = seen.at(-1);
  if (last === undefined) return `${name}no data in this range`;
  const low = seen.reduce((least, i) => Math.min(least, columns.min[i] ?? least), Infinity);
  const high = seen.reduce((most, i) => Math.max(most, columns.max[i] ?? most), -Infinity);
  const gaps = splitAtGaps(columns).gaps.filter((gap) => gap.toMs >= range.fromMs && gap.fromMs <= range.toMs);
  const missingMs = gaps.reduce((sum, gap) => sum + Math.min(gap.toMs, range.toMs) - Math.max(gap.fromMs, range.fromMs), 0);
  const missing = gaps.length === 0 ? '' : `, no data for ${spanWords(missingMs)} in ${gaps.length} ${gaps.length === 1 ? 'gap' : 'gaps'}`;
  const format = (value: number | undefined) => formatNumber(value, lane.decimals);
  return `${name}between ${format(low)} and ${format(high)}, last ${format(columns.mean[last])}${missing}`;
}

function doseSentence(lane: LaneInput, range: TimeRange): string[] {
  const { doses } = lane;
  if (!doses) return [];
  const seen = doses.columns.filter((column) => column.toMs > range.fromMs && column.fromMs < range.toMs);
  const pumpMl = seen.reduce((sum, column) => sum + column.pumpMl, 0);
  const handMl = seen.reduce((sum, column) => sum + column.handMl, 0);
  const planned = doses.steps.filter((step) => step.fromMs < range.toMs).at(-1);
  const format = (value: number) => formatNumber(value, lane.decimals);
  return [
    `${format(pumpMl)} mL by pump${handMl > 0 ? ` and ${format(handMl)} mL by hand` : ''} in this range`,
    ...(planned ? [`planned last ${format(planned.mlPerDay)} mL a day`] : []),
  ];
}

/** What a lane shows, in words, for those who do not see it. */
export function laneSummary(lane: LaneInput, range: TimeRange, zone: string): string {
  const parts = [
    ...(lane.tests ? [testSentence(lane, range, zone)] : []),
    ...lane.traces.map((trace) => traceSentence(lane, trace, range)),
    ...doseSentence(lane, range),
    ...(lane.band ? [lane.band.label] : []),
    ...lane.limits.map((limit) => limit.label),
  ];
  const unit = lane.unit === '' ? '' : `, ${lane.unit}`;
  return `${lane.title}${unit}: ${parts.join('; ')}.`;
}
