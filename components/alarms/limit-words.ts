import type { AlarmRule } from '#shared/contract/alarms.ts';
import type { AlarmCode } from '#shared/domain/alarm-codes.ts';
import { formatMl } from '../../lib/format/millilitres.ts';

/** What a limit watches, in a sentence. */
export const limitMeanings: Record<AlarmCode, string> = {
  'volume-hour': 'Carbon given to this system in any hour: all heads, and by hand.',
  'volume-day': 'Carbon given to this system in any 24 hours: all heads, and by hand.',
  'volume-week': 'Carbon given to this system in any 7 days: all heads, and by hand.',
  'run-too-long': 'A portion that does not end in 1.5 times its time and 10 s, or gives 1.5 times its volume.',
  'device-offline': 'A pump or probe that said goodbye, or was silent for 90 s.',
};

/** `4.3 of 10.5 mL now; soft 9.2 mL, hard 10.5 mL, from the schedule` */
export function limitSentence(rule: AlarmRule): string | null {
  if (!rule.enabled) return 'Switched off: no alarm shows, and nothing is stopped.';
  if (rule.unit !== 'mL') return rule.interlock ? 'Stops every carbon head when it goes off.' : null;
  const soft = rule.effectiveSoft;
  const hard = rule.effectiveHard;
  if (soft === null && hard === null) return 'Nothing is planned: any delivery by a pump counts as too much.';
  const counted = rule.current === null ? '' : `${formatMl(rule.current)} now; `;
  const limits = [soft === null ? null : `soft ${formatMl(soft)}`, hard === null ? null : `hard ${formatMl(hard)}`]
    .filter(Boolean)
    .join(', ');
  const source = rule.soft === null && rule.hard === null ? 'from the schedule' : 'set by hand';
  return `${counted}${limits}, ${source}.`;
}

/** What stands beside numbers of one's own: what was planned and given in the window, and the limits that would follow from the schedule. */
export function scheduleLimitsSentence({ code, fromSchedule, current }: AlarmRule): string | null {
  if (fromSchedule === null || current === null) return null;
  const { planned, soft, hard } = fromSchedule;
  const counted = `${formatMl(planned)} planned and ${formatMl(current)} given in ${windowWords(code)}.`;
  if (soft === null || hard === null) return `${counted} Without a schedule no limit follows from it.`;
  return `${counted} From the schedule it would be soft ${formatMl(soft)}, hard ${formatMl(hard)}.`;
}

function windowWords(code: AlarmCode): string {
  if (code === 'volume-hour') return 'the last hour';
  return code === 'volume-day' ? 'the last 24 h' : 'the last 7 days';
}
