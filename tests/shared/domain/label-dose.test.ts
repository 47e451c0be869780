import { describe, expect, it } from 'vitest';
import { doseCeilingMlPerDay, labelDoseMlPerDay } from '#shared/domain/label-dose.ts';
import { productStrength } from '#shared/domain/product-strength.ts';

const label = { ml: 2, maxMl: null, perLitres: 100, perDays: 1 };

describe('label dose', () => {
  it('scales with the water: 2 mL per 100 L and day in 420 L is 8.4 mL a day', () => {
    expect(labelDoseMlPerDay(label, 420)).toBeCloseTo(8.4, 12);
  });

  it('spreads a weekly label over its days', () => {
    expect(labelDoseMlPerDay({ ...label, perDays: 7 }, 420)).toBeCloseTo(1.2, 12);
  });

  it('takes the lower end of a range as the dose, and its upper end as the ceiling', () => {
    const range = { ...label, maxMl: 3 };
    expect(labelDoseMlPerDay(range, 420)).toBeCloseTo(8.4, 12);
    expect(doseCeilingMlPerDay({ label: range, carbonMgPerMl: null, netLitres: 420 })).toBeCloseTo(12.6, 12);
  });
});

describe('the ceiling', () => {
  it('is the label where the label names one dose', () => {
    expect(doseCeilingMlPerDay({ label, carbonMgPerMl: 164.6, netLitres: 420 })).toBeCloseTo(8.4, 12);
  });

  it('is 3 mg of carbon per litre and day without a label', () => {
    const strength = productStrength([{ substance: 'ethanol', percentByVolume: 40 }]);
    const ceiling = doseCeilingMlPerDay({ label: null, carbonMgPerMl: strength?.carbonMgPerMl ?? null, netLitres: 420 });
    expect(ceiling).toBeCloseTo((3 * 420) / 164.61, 2);
  });

  it.each([null, 0])('is unknown without a label when the carbon is %s', (carbonMgPerMl) => {
    expect(doseCeilingMlPerDay({ label: null, carbonMgPerMl, netLitres: 420 })).toBeNull();
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
