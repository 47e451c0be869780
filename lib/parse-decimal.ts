export type ParsedDecimal =
  | { ok: true; value: number }
  /** `empty`: nothing typed. `ambiguous`: `1,234` or `1.234`-like groups that could mean two numbers. `not-a-number`: anything else. */
  | { ok: false; why: 'empty' | 'ambiguous' | 'not-a-number' };

const plain = /^[+-]?(?:\d+(?:[.,]\d*)?|[.,]\d+)$/;
const grouped = /^[+-]?\d{1,3}(?:[.,\s']\d{3})+(?:[.,]\d+)?$/;

/**
 * Reads what a person typed: decimal comma and decimal point both count. A comma before exactly three digits (`1,234`) is
 * refused, since it is a thousand to some and a little over one to others; `1.234` is read as a decimal, since a point
 * before three digits is how instruments print them, and anything with two separators is refused.
 */
export function parseDecimal(text: string): ParsedDecimal {
  const typed = text.trim().replace(/\u2212/g, '-');
  if (typed === '') return { ok: false, why: 'empty' };
  const isThousandOrDecimal = /^[+-]?[1-9]\d{0,2},\d{3}$/.test(typed);
  if (isThousandOrDecimal) return { ok: false, why: 'ambiguous' };
  if (plain.test(typed)) {
    const value = Number(typed.replace(',', '.'));
    return Number.isFinite(value) ? { ok: true, value } : { ok: false, why: 'not-a-number' };
  }
  return { ok: false, why: grouped.test(typed) ? 'ambiguous' : 'not-a-number' };
}

/** What to say under the field. */
export function parseDecimalSentence(why: 'empty' | 'ambiguous' | 'not-a-number', typed: string): string {
  switch (why) {
    case 'empty':
      return 'Give a number';
    case 'ambiguous':
      return `"${typed.trim()}" can be read in two ways. Write it without separators for thousands, with a point for decimals`;
    case 'not-a-number':
      return 'Use digits only, such as 0.08';
  }
}
