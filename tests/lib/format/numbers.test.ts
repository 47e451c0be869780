import { describe, expect, it } from 'vitest';
import { formatMl, formatMlOf } from '../../../lib/format/millilitres.ts';
import { decimalsFor, formatNumber } from '../../../lib/format/number.ts';
import { formatBand, formatNutrient, placeInBand } from '../../../lib/format/nutrient.ts';
import { formatSeriesValue, seriesName, seriesNameAmong, seriesUnit } from '../../../lib/format/series-value.ts';

describe('formatNumber', () => {
  it.each([
    [3.456, 1, '3.5'],
    [-0.04, 1, '0.0'],
    [-2.5, 1, '\u22122.5'],
    [0, 0, '0'],
  ])('writes %d with %d decimals', (value, decimals, text) => {
    expect(formatNumber(value, decimals)).toBe(text);
  });

  it.each([NaN, Infinity, null, undefined])('has words for %s', (value) => {
    expect(formatNumber(value, 1)).toBe('no reading');
  });

  it.each([
    [0.123, 2],
    [12.3, 1],
    [123, 0],
    [NaN, 0],
  ])('shows %d with %d decimals when nothing else is known', (value, decimals) => {
    expect(decimalsFor(value)).toBe(decimals);
  });
});

describe('millilitres', () => {
  it.each([
    [0, '0.0 mL'],
    [0.175, '0.17 mL'],
    [3.5, '3.5 mL'],
    [250.4, '250 mL'],
  ])('writes %d', (ml, text) => {
    expect(formatMl(ml)).toBe(text);
  });

  it('rounds both of a pair as the larger', () => {
    expect(formatMlOf(0.5, 6)).toBe('0.5 of 6.0 mL');
  });
});

describe('nutrients', () => {
  it.each([
    ['nitrate', 12, false, '12'],
    ['nitrate', 7.5, false, '7.5'],
    ['nitrate', 2, true, 'under 2'],
    ['phosphate', 0.1, false, '0.10'],
    ['phosphate', 0.02, true, 'under 0.02'],
  ] as const)('writes %s %d', (nutrient, value, below, text) => {
    expect(formatNutrient(nutrient, value, below)).toBe(text);
  });

  it('writes a band with the decimals of the nutrient', () => {
    expect([formatBand('nitrate'), formatBand('phosphate')]).toEqual(['3 to 10', '0.03 to 0.10']);
  });

  const band = { lowMgPerL: 3, highMgPerL: 10 };
  it.each([
    [12, false, 'above'],
    [10, false, 'in band'],
    [3, false, 'in band'],
    [2.9, false, 'below'],
    [2, true, 'below'],
    [5, true, 'in band'],
    [20, true, 'above'],
  ] as const)('places %d (under it: %s) %s', (value, below, place) => {
    expect(placeInBand(value, below, band)).toBe(place);
  });
});

describe('measured values', () => {
  it('writes what the instrument can know, with its unit', () => {
    expect(formatSeriesValue({ quantity: 'temperature', unit: 'Cel' }, 25.234)).toBe('25.2 \u00b0C');
    expect(formatSeriesValue({ quantity: 'ph', unit: 'pH' }, 8.206)).toBe('8.21');
    expect(formatSeriesValue({ quantity: null, unit: 'lx' }, 123.4)).toBe('123 lx');
    expect(formatSeriesValue({ quantity: 'orp', unit: 'mV' }, null)).toBe('no reading');
  });

  it('calls a series by its given name, then by what it measures, then by its channel', () => {
    expect(seriesName({ quantity: 'ph', unit: 'pH', name: 'Sump pH', channel: 'ph' })).toBe('Sump pH');
    expect(seriesName({ quantity: 'ph', unit: 'pH', name: null, channel: 'ph' })).toBe('pH');
    expect(seriesName({ quantity: null, unit: 'lx', name: null, channel: 'lux:1' })).toBe('lux:1');
    expect(seriesUnit({ quantity: null, unit: 'lx' })).toBe('lx');
  });
});

describe('a series among others', () => {
  const power = (channel: string, name: string | null = null) => ({ quantity: 'power' as const, unit: 'W', channel, name });

  it('is told by its channel where another measures the same', () => {
    const all = [power('power-skimmer'), power('power_return'), power('heater.power', 'Heater'), power('power')];
    expect(all.map((one) => seriesNameAmong(one, all))).toEqual(['Power, skimmer', 'Power, return', 'Heater', 'Power']);
  });

  it('needs no more than its quantity when it is the only one', () => {
    expect(seriesNameAmong(power('power-skimmer'), [power('power-skimmer')])).toBe('Power');
  });
});
