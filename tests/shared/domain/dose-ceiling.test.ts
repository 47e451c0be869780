import { describe, expect, it } from 'vitest';
import { doseCeilingMlPerDay } from '../../../shared/domain/dose-ceiling.ts';

const label = { ml: 2, maxMl: null, perLitres: 100, perDays: 1 };

describe('the ceiling of a dose', () => {
  it('is the label dose for the net volume', () => {
    expect(doseCeilingMlPerDay({ label, carbonMgPerMl: null, netLitres: 420 })).toBeCloseTo(8.4, 10);
  });

  it('is the upper end of a label that names a range', () => {
    expect(doseCeilingMlPerDay({ label: { ...label, maxMl: 3 }, carbonMgPerMl: 164.6, netLitres: 420 })).toBeCloseTo(12.6, 10);
  });

  it('is 3 mg of carbon per litre and day without a label', () => {
    expect(doseCeilingMlPerDay({ label: null, carbonMgPerMl: 164.6, netLitres: 420 })).toBeCloseTo(7.655, 3);
  });

  it.each([
    ['neither label nor composition tells', null],
    ['the product holds no carbon', 0],
  ])('is unknown when %s', (_, carbonMgPerMl) => {
    expect(doseCeilingMlPerDay({ label: null, carbonMgPerMl, netLitres: 420 })).toBeNull();
  });
});
