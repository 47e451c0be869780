import { describe, expect, it } from 'vitest';
import { labelDoseMlPerDay } from '#shared/domain/label-dose.ts';
import { productStrength } from '#shared/domain/product-strength.ts';

const label = { ml: 2, maxMl: null, perLitres: 100, perDays: 1 };

describe('label dose', () => {
  it('scales with the water: 2 mL per 100 L and day in 420 L is 8.4 mL a day', () => {
    expect(labelDoseMlPerDay(label, 420)).toBeCloseTo(8.4, 12);
  });

  it('spreads a weekly label over its days', () => {
    expect(labelDoseMlPerDay({ ...label, perDays: 7 }, 420)).toBeCloseTo(1.2, 12);
  });

  it('takes the lower end of a range', () => {
    expect(labelDoseMlPerDay({ ...label, maxMl: 3 }, 420)).toBeCloseTo(8.4, 12);
  });
});

describe('the worked staircase of 40 % ethanol in 420 L', () => {
  const strength = productStrength([{ substance: 'ethanol', percentByVolume: 40 }]) ?? { oxygenDemandMgPerMl: NaN, carbonMgPerMl: NaN };
  it.each([
    [2.1, 1.381, 0.82],
    [4.2, 2.763, 1.65],
    [6.3, 4.144, 2.47],
    [8.4, 5.526, 3.29],
  ])('makes %f mL a day take %f g of oxygen and bring %f mg of carbon per litre', (mlPerDay, oxygenG, carbonMgPerL) => {
    expect((mlPerDay * strength.oxygenDemandMgPerMl) / 1000).toBeCloseTo(oxygenG, 3);
    expect((mlPerDay * strength.carbonMgPerMl) / 420).toBeCloseTo(carbonMgPerL, 2);
  });
});
