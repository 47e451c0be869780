import { DateTime } from 'luxon';
import { parseDecimal, parseDecimalSentence } from '../../lib/parse-decimal.ts';

export interface HandDoseDraft {
  readonly productId: string;
  readonly ml: string;
  /** As a `datetime-local` field holds it, in the zone of the site; empty means now. */
  readonly at: string;
}

export type HandDoseErrors = Partial<Record<keyof HandDoseDraft, string>>;

export type HandDoseRead =
  | { readonly ok: true; readonly body: { productId: string; ml: number; at: string } }
  | { readonly ok: false; readonly errors: HandDoseErrors };

/** Reads the form; a dose cannot lie in the future, since it was given already. */
export function readHandDose(draft: HandDoseDraft, timeZone: string, nowMs: number): HandDoseRead {
  const errors: HandDoseErrors = {};
  const parsed = parseDecimal(draft.ml);
  if (!parsed.ok) errors.ml = parsed.why === 'empty' ? 'Give the mL' : parseDecimalSentence(parsed.why, draft.ml);
  else if (parsed.value <= 0) errors.ml = 'Give mL above 0';
  if (draft.productId === '') errors.productId = 'Choose what was dosed';
  const at = draft.at === '' ? DateTime.fromMillis(nowMs, { zone: timeZone }) : DateTime.fromISO(draft.at, { zone: timeZone });
  const atText = at.toISO();
  if (atText === null) errors.at = 'Give the day and time';
  else if (at.toMillis() > nowMs + 60_000) errors.at = 'A dose that was given cannot lie in the future';
  if (!parsed.ok || atText === null || Object.keys(errors).length > 0) return { ok: false, errors };
  return { ok: true, body: { productId: draft.productId, ml: parsed.value, at: atText } };
}
