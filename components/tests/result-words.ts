import type { Test, TestQuantity } from '#shared/contract/records.ts';
import { unitsFor } from '#shared/units/nutrient-units.ts';
import { decimalsFor, formatNumber } from '../../lib/format/number.ts';
import { defaultBands, nutrientDecimals, placeInBand, type Nutrient } from '../../lib/format/nutrient.ts';
import { readResult, type ResultDraft } from './test-form.ts';

export const quantityNames: Record<TestQuantity, string> = {
  nitrate: 'Nitrate',
  phosphate: 'Phosphate',
  alkalinity: 'Alkalinity',
  ammonia: 'Ammonia',
  nitrite: 'Nitrite',
};

export function isNutrient(quantity: TestQuantity): quantity is Nutrient {
  return quantity === 'nitrate' || quantity === 'phosphate';
}

/** As it was written down: `under 0.02 mg/L PO4`, never more digits than were given. */
export function resultWords(test: Pick<Test, 'value' | 'unit' | 'below'>): string {
  const figure = formatNumber(test.value, decimalsOf(test.value));
  return `${test.below ? 'under ' : ''}${figure} ${test.unit}`;
}

/** `= 55 mg/L NO3`: a result in another unit, as the ion. Null where nothing is to be added, as for alkalinity, which is no ion. */
export function ionWords(quantity: TestQuantity, draft: ResultDraft): string | null {
  const [ionUnit] = unitsFor(quantity);
  if (quantity === 'alkalinity' || ionUnit === undefined || draft.unit === ionUnit) return null;
  const read = readResult(quantity, draft);
  if (!read.ok) return null;
  const mgPerL = read.canonicalMgPerL;
  const decimals = isNutrient(quantity) ? nutrientDecimals(quantity, mgPerL) : decimalsFor(mgPerL);
  return `= ${draft.below ? 'under ' : ''}${formatNumber(mgPerL, decimals)} ${ionUnit}`;
}

/** One test in words: `Nitrate 22 mg/L NO3`, and that it was corrected. */
export function testWords(test: Pick<Test, 'quantity' | 'value' | 'unit' | 'below' | 'edited'>): string {
  return `${quantityNames[test.quantity]} ${resultWords(test)}${test.edited ? ' (corrected)' : ''}`;
}

function decimalsOf(value: number): number {
  return String(value).split('.')[1]?.length ?? 0;
}

/** Where a nutrient lies; null for what has no band here. */
export function placeWords(test: Pick<Test, 'quantity' | 'canonicalMgPerL' | 'below'>): string | null {
  if (!isNutrient(test.quantity)) return null;
  return placeInBand(test.canonicalMgPerL, test.below, defaultBands[test.quantity]);
}

type Tested = Pick<Test, 'quantity' | 'canonicalMgPerL' | 'below'>;

/** What follows from the pair just written down, in one sentence. */
export function consequenceSentence(tests: readonly Tested[]): string {
  const nutrients = tests.filter((test) => isNutrient(test.quantity));
  const parts = nutrients.map((test) => `${quantityNames[test.quantity].toLowerCase()} ${placeWords(test) ?? ''}`);
  if (parts.length === 0) return 'Written down.';
  const allIn = nutrients.every((test) => placeWords(test) === 'in band');
  const anyBelow = nutrients.some((test) => placeWords(test) === 'below');
  const said = `Written down: ${parts.join(', ')}.`;
  if (anyBelow) return `${said} One below band: do not raise the dose.`;
  if (allIn) return nutrients.length === 2 ? 'Written down: both in band, nothing to change.' : `${said} Test the other one too.`;
  return nutrients.length === 2 ? said : `${said} Test the other one too.`;
}
