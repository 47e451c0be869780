import { describe, expect, it } from 'vitest';
import { partProblem, productStrength, type ProductPart } from '#shared/domain/product-strength.ts';

describe('product strength', () => {
  // g O2 and g C in a gram: from the balanced oxidation with IUPAC abridged atomic weights (Prohaska et al. 2022).
  it.each([
    ['methanol', 1.4979, 0.3749],
    ['ethanol', 2.0837, 0.5214],
    ['acetic-acid', 1.0657, 0.4],
    ['glucose', 1.0657, 0.4],
    ['sucrose', 1.1218, 0.4211],
  ] as const)('takes %s to demand %f g of oxygen and to hold %f g of carbon in a gram', (substance, oxygen, carbon) => {
    const strength = productStrength([{ substance, gramsPerLitre: 100 }]);
    expect(strength?.oxygenDemandMgPerMl).toBeCloseTo(100 * oxygen, 1);
    expect(strength?.carbonMgPerMl).toBeCloseTo(100 * carbon, 1);
  });

  // Ethanol at 20 degC is 789.24 kg/m3 (OIML R 22, 1973); % vol is defined at that temperature.
  it.each([
    [5, 82.23, 20.58],
    [10, 164.45, 41.15],
    [40, 657.82, 164.61],
    [70, 1151.18, 288.08],
    [96, 1578.76, 395.08],
    [100, 1644.54, 411.54],
  ])('computes ethanol of %d %% vol', (percentByVolume, oxygen, carbon) => {
    const strength = productStrength([{ substance: 'ethanol', percentByVolume }]);
    expect(strength?.oxygenDemandMgPerMl).toBeCloseTo(oxygen, 1);
    expect(strength?.carbonMgPerMl).toBeCloseTo(carbon, 1);
  });

  // FDA Compliance Policy Guide 525.825: the strength of vinegar is grams of acetic acid in 100 mL, so 5 % is 50 g/L.
  it('computes vinegar of 5 %', () => {
    const strength = productStrength([{ substance: 'acetic-acid', gramsPerLitre: 50 }]);
    expect(strength?.oxygenDemandMgPerMl).toBeCloseTo(53.28, 1);
    expect(strength?.carbonMgPerMl).toBeCloseTo(20.0, 1);
  });

  it('adds its parts up, and counts water as nothing', () => {
    const parts: ProductPart[] = [
      { substance: 'ethanol', percentByVolume: 20 },
      { substance: 'glucose', gramsPerLitre: 30 },
    ];
    const alone = parts.map((part) => productStrength([part])?.oxygenDemandMgPerMl ?? NaN);
    const together = productStrength([...parts, { substance: 'water', percentByVolume: 70 }]);
    expect(together?.oxygenDemandMgPerMl).toBeCloseTo(
      alone.reduce((sum, demand) => sum + demand, 0),
      9,
    );
    expect(productStrength([{ substance: 'water', percentByVolume: 100 }])).toEqual({ oxygenDemandMgPerMl: 0, carbonMgPerMl: 0 });
  });

  it.each<[string, ProductPart[]]>([
    ['nothing at all', []],
    [
      'an unnamed part',
      [
        { substance: 'ethanol', percentByVolume: 40 },
        { substance: 'other', gramsPerLitre: 1 },
      ],
    ],
    ['a solid by volume', [{ substance: 'sucrose', percentByVolume: 10 }]],
  ])('is unknown for a composition of %s', (_, composition) => {
    expect(productStrength(composition)).toBeNull();
  });

  it('says why a part cannot be', () => {
    expect(partProblem({ substance: 'glucose', percentByVolume: 10 })).toBe('solid-by-volume');
    expect(partProblem({ substance: 'ethanol', gramsPerLitre: 800 })).toBe('denser-than-pure');
    expect(partProblem({ substance: 'ethanol', gramsPerLitre: 789 })).toBeNull();
    expect(partProblem({ substance: 'ethanol', percentByVolume: 96 })).toBeNull();
    expect(partProblem({ substance: 'other', gramsPerLitre: 1900 })).toBeNull();
    expect(partProblem({ substance: 'water', percentByVolume: 100 })).toBeNull();
  });
});
