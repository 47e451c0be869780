import { describe, expect, it } from 'vitest';
import type { Test } from '#shared/contract/records.ts';
import { consequenceSentence, ionWords, placeWords, resultWords } from '../../../components/tests/result-words.ts';
import { lastValue, localTime, readLocalTime, readResult, usualUnit } from '../../../components/tests/test-form.ts';

const test: Test = {
  id: '0198f000-0000-7000-8000-000000000001',
  systemId: '0198f000-0000-7000-8000-000000000003',
  at: '2026-03-01T10:00:00Z',
  quantity: 'phosphate',
  value: 0.03,
  unit: 'mg/L PO4-P',
  below: false,
  canonicalMgPerL: 0.092,
  note: '',
  by: 'Keeper',
  byId: '0198f000-0000-7000-8000-000000000004',
  edited: false,
};

describe('a result as typed', () => {
  it.each([
    ['12', 12],
    ['0,08', 0.08],
    [' 0.5 ', 0.5],
  ])('reads "%s"', (text, value) => {
    expect(readResult('nitrate', { text, unit: 'mg/L NO3', below: false })).toMatchObject({ ok: true, value });
  });

  it('converts to the ion', () => {
    const read = readResult('nitrate', { text: '1', unit: 'mg/L NO3-N', below: false });
    expect(read.ok && read.canonicalMgPerL).toBeCloseTo(4.4266, 3);
  });

  it.each([
    ['', false],
    ['-1', false],
    ['1,234', false],
    ['abc', false],
    ['0', true],
  ])('refuses "%s" (below: %s) with words', (text, below) => {
    const read = readResult('nitrate', { text, unit: 'mg/L NO3', below });
    expect(read.ok ? '' : read.error.length).toBeGreaterThan(5);
  });

  it.each([
    ['nitrate', '501', 'mg/L NO3', 'Over 500 mg/L NO3 cannot be real: check the number and the unit'],
    ['phosphate', '8', 'mg/L PO4-P', 'Over 6.52 mg/L PO4-P cannot be real: check the number and the unit'],
  ] as const)('refuses %s of %s %s as a slip', (quantity, text, unit, error) => {
    expect(readResult(quantity, { text, unit, below: false })).toEqual({ ok: false, error });
  });

  it('goes on in the unit that was used last, from the last value in that unit', () => {
    expect(usualUnit('phosphate', [test])).toBe('mg/L PO4-P');
    expect(usualUnit('nitrate', [test])).toBe('mg/L NO3');
    expect(lastValue('phosphate', 'mg/L PO4-P', [test])).toBe(0.03);
    expect(lastValue('phosphate', 'mg/L PO4', [test])).toBeUndefined();
  });
});

describe('the time of a test', () => {
  it("is the site's, also across a daylight-saving change", () => {
    const ms = Date.parse('2026-03-29T12:00:00Z');
    expect(localTime(ms, 'Europe/Lisbon')).toBe('2026-03-29T13:00');
    expect(Date.parse(readLocalTime('2026-03-29T13:00', 'Europe/Lisbon') ?? '')).toBe(ms);
    expect(Date.parse(readLocalTime('2026-03-28T13:00', 'Europe/Lisbon') ?? '')).toBe(Date.parse('2026-03-28T13:00:00Z'));
  });

  it('is null when it is none', () => {
    expect(readLocalTime('', 'UTC')).toBeNull();
  });
});

describe('the words for a result', () => {
  it('keep the digits that were given, and say "under" for below detection', () => {
    expect(resultWords({ value: 0.125, unit: 'mg/L PO4', below: false })).toBe('0.125 mg/L PO4');
    expect(resultWords({ value: 12, unit: 'mg/L NO3', below: false })).toBe('12 mg/L NO3');
    expect(resultWords({ value: 0.02, unit: 'mg/L PO4', below: true })).toBe('under 0.02 mg/L PO4');
  });

  it('place nutrients in their band and leave others unplaced', () => {
    expect(placeWords({ quantity: 'nitrate', canonicalMgPerL: 12, below: false })).toBe('above');
    expect(placeWords({ quantity: 'alkalinity', canonicalMgPerL: 140, below: false })).toBeNull();
  });
});

describe('a result in another unit', () => {
  it.each([
    ['nitrate', '12,4', 'mg/L NO3-N', false, '= 55 mg/L NO3'],
    ['phosphate', '30', 'ug/L PO4-P', false, '= 0.09 mg/L PO4'],
    ['phosphate', '10', 'ug/L PO4', true, '= under 0.01 mg/L PO4'],
    ['nitrate', '12', 'mg/L NO3', false, null],
    ['nitrate', '', 'mg/L NO3-N', false, null],
    ['alkalinity', '8', 'dKH', false, null],
  ] as const)('is %s %s %s (below: %s) as the ion', (quantity, text, unit, below, words) => {
    expect(ionWords(quantity, { text, unit, below })).toBe(words);
  });
});

describe('the consequence of a pair', () => {
  const nitrate = (canonicalMgPerL: number) => ({ quantity: 'nitrate' as const, canonicalMgPerL, below: false });
  const phosphate = (canonicalMgPerL: number) => ({ quantity: 'phosphate' as const, canonicalMgPerL, below: false });

  it.each([
    [[nitrate(5), phosphate(0.05)], 'Written down: both in band, nothing to change.'],
    [[nitrate(12), phosphate(0.05)], 'Written down: nitrate above, phosphate in band.'],
    [[nitrate(12), phosphate(0.01)], 'Written down: nitrate above, phosphate below. One below band: do not raise the dose.'],
    [[nitrate(5)], 'Written down: nitrate in band. Test the other one too.'],
    [[nitrate(12)], 'Written down: nitrate above. Test the other one too.'],
  ])('is said in one sentence', (tests, sentence) => {
    expect(consequenceSentence(tests)).toBe(sentence);
  });
});
