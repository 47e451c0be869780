import type { AlarmRule } from '#shared/contract/alarms.ts';
import { parseDecimal, parseDecimalSentence } from '../../lib/parse-decimal.ts';

/** What stands in the limit editor, as typed. */
export interface LimitForm {
  fromSchedule: boolean;
  softText: string;
  hardText: string;
  enabled: boolean;
  interlock: boolean;
}

export type LimitField = 'soft' | 'hard';

export type LimitFormResult =
  | { ok: true; body: { target: string; enabled: boolean; soft: number | null; hard: number | null; interlock: boolean } }
  | { ok: false; errors: Partial<Record<LimitField, string>> };

const figure = (value: number | null) => (value === null ? '' : String(Math.round(value * 100) / 100));

/** Opens with what holds: the numbers that were set, or those that follow from the schedule now. */
export function limitFormOf(rule: AlarmRule): LimitForm {
  return {
    fromSchedule: rule.soft === null && rule.hard === null,
    softText: figure(rule.soft ?? rule.effectiveSoft),
    hardText: figure(rule.hard ?? rule.effectiveHard),
    enabled: rule.enabled,
    interlock: rule.interlock,
  };
}

function read(text: string): number | string {
  const parsed = parseDecimal(text);
  if (!parsed.ok) return parseDecimalSentence(parsed.why, text);
  return parsed.value > 0 ? parsed.value : 'A limit must be above 0';
}

/** The form as the API takes it, or what to put right, by field. Soft is always under hard. */
export function readLimitForm(rule: AlarmRule, form: LimitForm): LimitFormResult {
  const kept = { target: rule.target, enabled: form.enabled, interlock: form.interlock };
  if (form.fromSchedule || rule.unit !== 'mL') return { ok: true, body: { ...kept, soft: null, hard: null } };
  const soft = read(form.softText);
  const hard = read(form.hardText);
  const errors: Partial<Record<LimitField, string>> = {};
  if (typeof soft === 'string') errors.soft = soft;
  if (typeof hard === 'string') errors.hard = hard;
  if (typeof soft === 'string' || typeof hard === 'string') return { ok: false, errors };
  if (soft >= hard) return { ok: false, errors: { soft: 'The soft limit must be under the hard limit' } };
  return { ok: true, body: { ...kept, soft, hard } };
}
