import { describe, expect, it } from 'vitest';
import { parseDecimal, parseDecimalSentence } from '../../lib/parse-decimal.ts';

describe('parseDecimal', () => {
  it.each([
    ['12', 12],
    ['0.08', 0.08],
    ['0,08', 0.08],
    ['0,125', 0.125],
    [' 3.5 ', 3.5],
    ['.5', 0.5],
    [',5', 0.5],
    ['3,', 3],
    ['-2', -2],
    ['\u22122,5', -2.5],
    ['1.234', 1.234],
    ['1234,5', 1234.5],
    ['+7', 7],
  ])('reads %j', (text, value) => {
    expect(parseDecimal(text)).toEqual({ ok: true, value });
  });

  it.each(['1,234', '12,345', '999,000', '1.234,5', '1,234.5', '1 234', "1'234", '1.234.567'])('refuses %j as ambiguous', (text) => {
    expect(parseDecimal(text)).toEqual({ ok: false, why: 'ambiguous' });
  });

  it.each(['abc', '1e5', '12 mg', '--1', '1,2,3', '.', 'NaN', 'Infinity', '\u0661'])('refuses %j as no number', (text) => {
    expect(parseDecimal(text)).toEqual({ ok: false, why: 'not-a-number' });
  });

  it.each(['', '   '])('tells %j from a wrong number', (text) => {
    expect(parseDecimal(text)).toEqual({ ok: false, why: 'empty' });
  });

  it('refuses what is too large for a number', () => {
    expect(parseDecimal('9'.repeat(400)).ok).toBe(false);
  });

  it('says what was typed when it is ambiguous', () => {
    expect(parseDecimalSentence('ambiguous', ' 1,234 ')).toContain('"1,234"');
  });
});
