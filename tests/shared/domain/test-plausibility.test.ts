import { describe, expect, it } from 'vitest';
import { highestPlausibleMgPerL, isPlausible } from '#shared/domain/test-plausibility.ts';
import { testQuantities } from '#shared/units/nutrient-units.ts';

describe('a plausible test', () => {
  it.each(testQuantities)('of %s reaches from 0 to its limit', (quantity) => {
    const highest = highestPlausibleMgPerL[quantity];
    expect(isPlausible(quantity, 0)).toBe(true);
    expect(isPlausible(quantity, highest)).toBe(true);
    expect(isPlausible(quantity, highest * 1.0001)).toBe(false);
    expect(isPlausible(quantity, -0.01)).toBe(false);
    expect(isPlausible(quantity, NaN)).toBe(false);
  });

  it('leaves room for a neglected system and refuses a slip', () => {
    expect(isPlausible('nitrate', 200)).toBe(true);
    expect(isPlausible('nitrate', 5000)).toBe(false);
    expect(isPlausible('phosphate', 5)).toBe(true);
    expect(isPlausible('phosphate', 50)).toBe(false);
  });
});
