import type { TestQuantity } from '#shared/contract/records.ts';
import { recordTimeProblem } from '#shared/domain/record-time.ts';
import { highestPlausibleMgPerL, isPlausible } from '#shared/domain/test-plausibility.ts';
import { type TestUnit, fromCanonicalMgPerL, toCanonicalMgPerL, unitsFor } from '#shared/units/nutrient-units.ts';
import type { FieldError } from '../errors.ts';
import { recordTimeMessages } from './check-record-time.ts';

/** A test as somebody wrote it down. */
export interface WrittenTest {
  at: string;
  quantity: TestQuantity;
  value: number;
  unit: TestUnit;
  below: boolean;
  note: string;
}

/** What the table keeps of it. */
export interface ReadTest {
  atMs: number;
  quantity: TestQuantity;
  qualifier: '<' | '=';
  value: number;
  unit: TestUnit;
  canonicalMgPerL: number;
  note: string;
}

/** Checks what the shape alone cannot tell: that the unit fits, that the result can be real, and the time. */
export function readTest(test: WrittenTest, nowMs: number): ReadTest | { errors: FieldError[] } {
  const { at, quantity, value, unit, below, note } = test;
  const atMs = Date.parse(at);
  const errors: FieldError[] = [];
  const timeProblem = recordTimeProblem(atMs, nowMs);
  if (timeProblem !== null) errors.push({ path: 'at', message: recordTimeMessages[timeProblem] });
  const canonicalMgPerL = toCanonicalMgPerL(quantity, value, unit);
  if (canonicalMgPerL === null) {
    errors.push({ path: 'unit', message: `${unit} is no unit of ${quantity}; use ${unitsFor(quantity).join(' or ')}` });
  } else if (!isPlausible(quantity, canonicalMgPerL)) {
    const highest = fromCanonicalMgPerL(quantity, highestPlausibleMgPerL[quantity], unit) ?? NaN;
    const rounded = Number(highest.toPrecision(3));
    errors.push({
      path: 'value',
      message: `No water has that much ${quantity}: above ${rounded} ${unit} it is a slip; check value and unit`,
    });
  } else if (below && value === 0) {
    errors.push({ path: 'value', message: 'Give the detection limit of the kit: a result below 0 says nothing' });
  }
  if (errors.length > 0 || canonicalMgPerL === null) return { errors };
  return { atMs, quantity, qualifier: below ? '<' : '=', value, unit, canonicalMgPerL, note };
}
