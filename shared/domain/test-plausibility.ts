import type { testQuantities } from '../units/nutrient-units.ts';

type TestQuantity = (typeof testQuantities)[number];

/**
 * Above these a result is a slip of the keyboard, the unit or the kit, and not water in which anything lives: mg/L of
 * the ion, alkalinity mg/L CaCO3 (56 dKH). The project's own choice, several times what neglected systems show.
 */
export const highestPlausibleMgPerL: Record<TestQuantity, number> = {
  nitrate: 500,
  phosphate: 20,
  ammonia: 20,
  nitrite: 50,
  alkalinity: 1000,
};

/**
 * Whether a result can be real. A result of 0 can: a kit prints it, and only "below" says what it could not see.
 * @param canonicalMgPerL mg/L of the ion, alkalinity mg/L CaCO3
 */
export function isPlausible(quantity: TestQuantity, canonicalMgPerL: number): boolean {
  return canonicalMgPerL >= 0 && canonicalMgPerL <= highestPlausibleMgPerL[quantity];
}
