import { atomicWeights, molarMass } from './atomic-weights.ts';

/** What is tested by hand. */
export const testQuantities = ['nitrate', 'phosphate', 'alkalinity', 'ammonia', 'nitrite'] as const;
type TestQuantity = (typeof testQuantities)[number];

/** Units in which test kits print their results. */
export const testUnits = [
  'mg/L NO3',
  'mg/L NO3-N',
  'mg/L PO4',
  'mg/L PO4-P',
  'ug/L PO4',
  'ug/L PO4-P',
  'mg/L NH4',
  'mg/L NH3-N',
  'mg/L NO2',
  'mg/L NO2-N',
  'dKH',
  'mg/L CaCO3',
  'meq/L',
] as const;
export type TestUnit = (typeof testUnits)[number];

const nitratePerNitrogen = molarMass({ N: 1, O: 3 }) / atomicWeights.N;
const nitritePerNitrogen = molarMass({ N: 1, O: 2 }) / atomicWeights.N;
const ammoniumPerNitrogen = molarMass({ N: 1, H: 4 }) / atomicWeights.N;
const phosphatePerPhosphorus = molarMass({ P: 1, O: 4 }) / atomicWeights.P;
const calciumCarbonate = molarMass({ Ca: 1, C: 1, O: 3 });

/** mg/L of the quantity's own ion in one of the unit; the units that a quantity has no entry for do not fit it. */
const canonicalPerUnit: Record<TestQuantity, Partial<Record<TestUnit, number>>> = {
  nitrate: { 'mg/L NO3': 1, 'mg/L NO3-N': nitratePerNitrogen },
  phosphate: {
    'mg/L PO4': 1,
    'mg/L PO4-P': phosphatePerPhosphorus,
    'ug/L PO4': 1e-3,
    'ug/L PO4-P': phosphatePerPhosphorus * 1e-3,
  },
  ammonia: { 'mg/L NH4': 1, 'mg/L NH3-N': ammoniumPerNitrogen },
  nitrite: { 'mg/L NO2': 1, 'mg/L NO2-N': nitritePerNitrogen },
  // A degree of (carbonate) hardness is 10 mg/L of CaO; an equivalent is half a mole of CaCO3.
  alkalinity: { 'mg/L CaCO3': 1, dKH: (10 * calciumCarbonate) / molarMass({ Ca: 1, O: 1 }), 'meq/L': calciumCarbonate / 2 },
};

/** The units in which a quantity can be written down, the plainest first. */
export function unitsFor(quantity: TestQuantity): TestUnit[] {
  return testUnits.filter((unit) => canonicalPerUnit[quantity][unit] !== undefined);
}

/**
 * A test result as mg/L of the ion (NO3, PO4, NH4, NO2), alkalinity as mg/L CaCO3; null when the unit does not fit the
 * quantity. Factors from the IUPAC abridged standard atomic weights.
 * @example toCanonicalMgPerL('nitrate', 1, 'mg/L NO3-N') // 4.42664
 * @example toCanonicalMgPerL('phosphate', 30, 'ug/L PO4-P') // 0.09198
 */
export function toCanonicalMgPerL(quantity: TestQuantity, value: number, unit: TestUnit): number | null {
  const factor = canonicalPerUnit[quantity][unit];
  return factor === undefined ? null : value * factor;
}

/**
 * The other way: mg/L of the ion in the unit in which somebody reads; null when the unit does not fit the quantity.
 * @example fromCanonicalMgPerL('nitrate', 10, 'mg/L NO3-N') // 2.25905
 */
export function fromCanonicalMgPerL(quantity: TestQuantity, mgPerL: number, unit: TestUnit): number | null {
  const factor = canonicalPerUnit[quantity][unit];
  return factor === undefined ? null : mgPerL / factor;
}
