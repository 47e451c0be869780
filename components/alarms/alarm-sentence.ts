import type { Alarm } from '#shared/contract/alarms.ts';
import type { AlarmCode } from '#shared/domain/alarm-codes.ts';
import { formatMl } from '../../lib/format/millilitres.ts';
import { formatNumber } from '../../lib/format/number.ts';
import { formatNear } from '../../lib/format/time.ts';

const windows: Partial<Record<AlarmCode, string>> = { 'volume-hour': 'an hour', 'volume-day': '24 hours', 'volume-week': '7 days' };

function textOf(evidence: Alarm['evidence'], name: string): string | null {
  const value = evidence[name];
  return typeof value === 'string' ? value : null;
}

function amount(value: number, unit: string): string {
  return unit === 'mL' ? formatMl(value) : `${formatNumber(value, 0)} ${unit}`;
}

/** What happened, in one sentence made from the alarm's own figures. */
export function alarmSentence(alarm: Alarm, timeZone: string, nowMs: number): string {
  switch (alarm.code) {
    case 'volume-hour':
    case 'volume-day':
    case 'volume-week': {
      const given = alarm.value === null ? 'More carbon than allowed' : `${formatMl(alarm.value)} of carbon`;
      const limit = alarm.limit === null ? 'while nothing was planned' : `over the ${alarm.limitKind} limit of ${formatMl(alarm.limit)}`;
      return `${given} within ${windows[alarm.code] ?? 'the window'}, ${limit}.`;
    }
    case 'run-too-long': {
      const head = typeof alarm.evidence.head === 'number' ? `Head ${alarm.evidence.head}` : 'A head';
      if (alarm.value === null || alarm.limit === null) return `${head} ran longer than its portion takes.`;
      return alarm.unit === 'mL'
        ? `${head} gave ${formatMl(alarm.value)} in one portion; ${formatMl(alarm.limit)} is the most that it may.`
        : `${head} has been running for ${amount(alarm.value, alarm.unit)}; ${amount(alarm.limit, alarm.unit)} is the longest that it may.`;
    }
    case 'device-offline': {
      const name = textOf(alarm.evidence, 'deviceName') ?? 'A device';
      const since = textOf(alarm.evidence, 'offlineSince');
      const pump = alarm.evidence.deviceKind === 'pump' ? ' A pump keeps its own schedule.' : '';
      return `${name} has not been heard${since === null ? '' : ` since ${formatNear(since, timeZone, nowMs)}`}.${pump}`;
    }
  }
}
