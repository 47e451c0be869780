import { describe, expect, it } from 'vitest';
import { molarMass } from '#shared/units/atomic-weights.ts';
import { fromCanonicalMgPerL, testQuantities, testUnits, toCanonicalMgPerL, unitsFor } from '#shared/units/nutrient-units.ts';

/** Relative difference: the editions of the atomic weights in print differ by less. */
const ofEdition = 1e-4;

function expectRatio(actual: number | null, published: number, tolerance = ofEdition) {
  expect(actual).not.toBeNull();
  expect(Math.abs((actual ?? NaN) / published - 1)).toBeLessThan(tolerance);
}

describe('nutrient units', () => {
  // Computed from the abridged standard atomic weights, Prohaska et al. 2022, Pure Appl. Chem. 94:573-600:
  // N 14.007, O 15.999, P 30.974, H 1.008, Ca 40.078, C 12.011.
  it.each([
    ['nitrate', 'mg/L NO3-N', 4.42664],
    ['nitrite', 'mg/L NO2-N', 3.28443],
    ['ammonia', 'mg/L NH3-N', 1.28786],
    ['phosphate', 'mg/L PO4-P', 3.06614],
    ['phosphate', 'ug/L PO4-P', 0.00306614],
    ['phosphate', 'ug/L PO4', 0.001],
    ['alkalinity', 'dKH', 17.848],
    ['alkalinity', 'meq/L', 50.043],
  ] as const)('counts 1 %s in %s as %f mg/L of the ion (IUPAC atomic weights)', (quantity, unit, published) => {
    expectRatio(toCanonicalMgPerL(quantity, 1, unit), published, 1e-5);
  });

  // The factors commonly printed with the earlier weights N 14.0067, O 15.9994, P 30.9738 (IUPAC 1985).
  it.each([
    ['nitrate', 'mg/L NO3-N', 4.4268],
    ['phosphate', 'mg/L PO4-P', 3.0662],
  ] as const)('agrees with the factor in print for %s in %s', (quantity, unit, printed) => {
    expectRatio(toCanonicalMgPerL(quantity, 1, unit), printed);
  });

  // Amounts of substance from the same IUPAC weights: 1 mg/L of NO3 is 16.1280 umol/L, of PO4 10.5297 umol/L.
  it('gives the molar masses of the ions', () => {
    expectRatio(1000 / molarMass({ N: 1, O: 3 }), 16.128, 1e-5);
    expectRatio(1000 / molarMass({ P: 1, O: 4 }), 10.5297, 1e-5);
  });

  it('comes back to the value that it started from, in every unit that fits', () => {
    for (const quantity of testQuantities) {
      for (const unit of unitsFor(quantity)) {
        expect(fromCanonicalMgPerL(quantity, toCanonicalMgPerL(quantity, 7.5, unit) ?? NaN, unit)).toBeCloseTo(7.5, 12);
      }
    }
  });

  it('gives each unit to exactly one quantity, and null for every other pair', () => {
    for (const unit of testUnits) {
      const fitting = testQuantities.filter((quantity) => toCanonicalMgPerL(quantity, 1, unit) !== null);
      expect(fitting).toHaveLength(1);
      expect(testQuantities.filter((quantity) => fromCanonicalMgPerL(quantity, 1, unit) !== null)).toEqual(fitting);
    }
  });

  it('offers the plainest unit first', () => {
    expect(testQuantities.map((quantity) => unitsFor(quantity)[0])).toEqual(['mg/L NO3', 'mg/L PO4', 'dKH', 'mg/L NH4', 'mg/L NO2']);
  });
});
