import type { Tape } from '#shared/contract/telemetry.ts';
import { formatMl } from '../../lib/format/millilitres.ts';
import { formatClock } from '../../lib/format/time.ts';
import { tapeItems, type TapeItem, type TapeKind } from './drop-tape-model.ts';

/** What each mark means, as it stands in the key, the table and the details. */
export const kindWords: Record<TapeKind, string> = {
  planned: 'planned',
  running: 'running now',
  delivered: 'given',
  partial: 'given in part',
  unheard: 'not yet heard',
  missed: 'missed',
  held: 'held',
  interlocked: 'stopped by an alarm',
  hand: 'by hand',
  unplanned: 'unplanned',
};

/** As counted in the sentence, in this order. */
const countWords: readonly (readonly [TapeKind, string])[] = [
  ['running', 'running now'],
  ['partial', 'in part'],
  ['unheard', 'unheard'],
  ['missed', 'missed'],
  ['held', 'held'],
  ['interlocked', 'stopped by an alarm'],
  ['unplanned', 'unplanned'],
  ['hand', 'by hand'],
];

/** "7 of 12 portions given, 1 unheard, next 14:10" */
export function tapeSentence(tape: Tape, zone: string, nowMs: number): string {
  const items = tapeItems(tape);
  const planned = items.filter((item) => item.plannedMl > 0);
  const given = planned.filter((item) => item.kind === 'delivered').length;
  const counts = countWords
    .map(([kind, words]) => ({ words, count: items.filter((item) => item.kind === kind).length }))
    .filter(({ count }) => count > 0)
    .map(({ words, count }) => `${count} ${words}`);
  const next = planned.find((item) => item.kind === 'planned' && item.tMs > nowMs);
  const portions = planned.length === 1 ? 'portion' : 'portions';
  const first = planned.length === 0 ? 'No portion is planned' : `${given} of ${planned.length} ${portions} given`;
  const last = next === undefined ? (planned.length === 0 ? [] : ['no more today']) : [`next ${formatClock(next.tMs, zone)}`];
  return [first, ...counts, ...last].join(', ');
}

/** "13:10: 0.53 mL planned, given" */
export function itemWords(item: TapeItem, zone: string): string {
  const when = formatClock(item.tMs, zone);
  if (item.plannedMl === 0) return `${when}: ${formatMl(item.givenMl)} ${kindWords[item.kind]}`;
  const given = item.kind === 'partial' || item.kind === 'running' ? `, ${formatMl(item.givenMl)} so far` : '';
  return `${when}: ${formatMl(item.plannedMl)} planned, ${kindWords[item.kind]}${given}`;
}
