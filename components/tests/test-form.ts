import { DateTime } from 'luxon';
import type { Test, TestQuantity } from '#shared/contract/records.ts';
import { highestPlausibleMgPerL, isPlausible } from '#shared/domain/test-plausibility.ts';
import { fromCanonicalMgPerL, type TestUnit, toCanonicalMgPerL, unitsFor } from '#shared/units/nutrient-units.ts';
import { decimalsFor, formatNumber } from '../../lib/format/number.ts';
import { parseDecimal, parseDecimalSentence } from '../../lib/parse-decimal.ts';

/** One result as typed. */
export interface ResultDraft {
  text: string;
  unit: TestUnit;
  below: boolean;
}

export type ResultRead = { ok: true; value: number; canonicalMgPerL: number } | { ok: false; error: string };

/** The unit in which this quantity was written down last, else the plainest. */
export function usualUnit(quantity: TestQuantity, tests: readonly Test[]): TestUnit {
  const last = tests.find((test) => test.quantity === quantity);
  return last?.unit ?? unitsFor(quantity)[0] ?? 'mg/L NO3';
}

/** The last value in this unit: where a stepper goes on from. */
export function lastValue(quantity: TestQuantity, unit: TestUnit, tests: readonly Test[]): number | undefined {
  return tests.find((test) => test.quantity === quantity && test.unit === unit)?.value;
}

/** How far one press of a stepper goes: about what a kit can tell. */
export function stepFor(unit: TestUnit): { step: number; decimals: number } {
  switch (unit) {
    case 'mg/L NO3':
      return { step: 1, decimals: 0 };
    case 'mg/L PO4':
    case 'mg/L PO4-P':
      return { step: 0.01, decimals: 2 };
    case 'ug/L PO4':
    case 'ug/L PO4-P':
    case 'mg/L CaCO3':
      return { step: 1, decimals: 0 };
    default:
      return { step: 0.1, decimals: 1 };
  }
}

export function readResult(quantity: TestQuantity, draft: ResultDraft): ResultRead {
  const parsed = parseDecimal(draft.text);
  if (!parsed.ok) return { ok: false, error: parseDecimalSentence(parsed.why, draft.text) };
  if (parsed.value < 0) return { ok: false, error: 'A result cannot be negative' };
  if (draft.below && parsed.value === 0) return { ok: false, error: 'Give the value that it was under, as printed by the kit' };
  const canonicalMgPerL = toCanonicalMgPerL(quantity, parsed.value, draft.unit);
  if (canonicalMgPerL === null) return { ok: false, error: `${draft.unit} does not fit ${quantity}` };
  if (!isPlausible(quantity, canonicalMgPerL)) {
    const most = fromCanonicalMgPerL(quantity, highestPlausibleMgPerL[quantity], draft.unit) ?? 0;
    return {
      ok: false,
      error: `Over ${formatNumber(most, decimalsFor(most))} ${draft.unit} cannot be real: check the number and the unit`,
    };
  }
  return { ok: true, value: parsed.value, canonicalMgPerL };
}

/** The value of a date and time field, in the site's zone. */
export function localTime(ms: number, timeZone: string): string {
  return DateTime.fromMillis(ms, { zone: timeZone }).toFormat("yyyy-MM-dd'T'HH:mm");
}

/** RFC 3339 of such a value; null when it is no time. */
export function readLocalTime(text: string, timeZone: string): string | null {
  return DateTime.fromISO(text, { zone: timeZone }).toISO();
}
