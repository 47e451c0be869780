import { describe, expect, it } from 'vitest';
import type { Test } from '#shared/contract/records.ts';
import { testDays } from '../../../components/tests/test-days.ts';
import { testWords } from '../../../components/tests/result-words.ts';

const nowMs = Date.parse('2026-12-01T14:00:00Z');
const test = (id: string, at: string): Test => ({
  id,
  systemId: 'system',
  at,
  quantity: 'nitrate',
  value: 22,
  unit: 'mg/L NO3',
  below: false,
  canonicalMgPerL: 22,
  note: '',
  by: 'Keeper',
  byId: 'keeper',
  edited: false,
});
const shape = (tests: Test[], zone: string) =>
  testDays(tests, zone, nowMs).map(({ title, tests: ofDay }) => [title, ofDay.map(({ id }) => id)]);

describe('tests by day', () => {
  it('stand under the day of the site on which they were made', () => {
    const tests = [test('d', '2026-12-01T09:00:00Z'), test('c', '2026-11-30T23:30:00Z'), test('b', '2026-11-24T09:00:00Z')];
    expect(shape(tests, 'UTC')).toEqual([
      ['Today', ['d']],
      ['Yesterday', ['c']],
      ['Tuesday 24 November', ['b']],
    ]);
    expect(shape(tests, 'Europe/Berlin')).toEqual([
      ['Today', ['d', 'c']],
      ['Tuesday 24 November', ['b']],
    ]);
  });

  it('keep the order in which they come, and are one group a day', () => {
    const tests = [test('c', '2026-11-24T18:00:00Z'), test('b', '2026-11-24T09:00:00Z'), test('a', '2025-11-24T09:00:00Z')];
    expect(shape(tests, 'UTC')).toEqual([
      ['Tuesday 24 November', ['c', 'b']],
      ['Monday 24 November 2025', ['a']],
    ]);
  });

  it('are none when there is no test', () => {
    expect(testDays([], 'UTC', nowMs)).toEqual([]);
  });
});

describe('a test in words', () => {
  it('has its unit, as many digits as were written down, and says that it was corrected', () => {
    expect(testWords(test('a', '2026-12-01T09:00:00Z'))).toBe('Nitrate 22 mg/L NO3');
    expect(testWords({ quantity: 'alkalinity', value: 8.1, unit: 'dKH', below: false, edited: true })).toBe(
      'Alkalinity 8.1 dKH (corrected)',
    );
  });
});
