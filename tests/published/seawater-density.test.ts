import { describe, expect, it } from 'vitest';
import { seawaterDensityKgPerM3 } from '#shared/domain/seawater-density.ts';

describe('seawater density at one atmosphere', () => {
  // Millero & Poisson (1981); check values printed in UNESCO Technical Papers in Marine Science 44, p. 19.
  it.each([
    [0, 5, 999.96675],
    [0, 25, 997.04796],
    [35, 5, 1027.67547],
    [35, 25, 1023.34306],
  ])('salinity %d at %d degC gives %d kg/m3', (salinity, temperatureC, density) => {
    expect(Math.abs(seawaterDensityKgPerM3(salinity, temperatureC) - density)).toBeLessThan(1e-5);
  });

  // The same report, p. 16: rho(35, 0) - 1000.
  it('gives 1028.106331 for salinity 35 at 0 degC', () => {
    expect(seawaterDensityKgPerM3(35, 0)).toBeCloseTo(1028.106331, 5);
  });

  it.each([
    [-1, 20],
    [43, 20],
    [35, -3],
    [35, 41],
    [Number.NaN, 20],
  ])('refuses salinity %d at %d degC', (salinity, temperatureC) => {
    expect(() => seawaterDensityKgPerM3(salinity, temperatureC)).toThrow(RangeError);
  });
});
