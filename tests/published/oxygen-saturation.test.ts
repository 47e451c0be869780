import { describe, expect, it } from 'vitest';
import { oxygenMgPerLOfPercent, oxygenSaturationMgPerL, oxygenSaturationUmolPerKg } from '#shared/domain/oxygen-saturation.ts';

/**
 * Benson & Krause (1984) as printed in Standard Methods 4500-O:I and the USGS tables, mg/L: an independent equation.
 * ln C by temperature in kelvin and salinity.
 */
function bensonKrauseMgPerL(salinity: number, temperatureC: number): number {
  const kelvin = temperatureC + 273.15;
  return Math.exp(
    -139.34411 +
      1.575701e5 / kelvin -
      6.642308e7 / kelvin ** 2 +
      1.2438e10 / kelvin ** 3 -
      8.621949e11 / kelvin ** 4 -
      salinity * (1.7674e-2 - 10.754 / kelvin + 2140.7 / kelvin ** 2),
  );
}

describe('oxygen saturation', () => {
  // The check value of Garcia & Gordon (1992): salinity 35, 10 degC.
  it('gives the published check value', () => {
    expect(Math.abs(oxygenSaturationUmolPerKg(35, 10) - 274.61)).toBeLessThan(0.001);
  });

  // Computed from the published coefficients of the same fit; a digit slip in one of them moves these.
  it.each([
    [0, 10, 352.864],
    [0, 20, 284.652],
    [35, 0, 347.903],
    [35, 20, 225.537],
    [35, 25, 206.788],
  ])('salinity %d at %d degC gives %d umol/kg', (salinity, temperatureC, umolPerKg) => {
    expect(Math.abs(oxygenSaturationUmolPerKg(salinity, temperatureC) - umolPerKg)).toBeLessThan(0.01);
  });

  // Standard Methods 4500-O:I, fresh water column: 14.621 mg/L at 0 degC; EN 25814: 9.09 at 20 and 8.26 at 25 degC.
  it.each([
    [0, 14.621],
    [20, 9.09],
    [25, 8.26],
  ])('stays within 0.1 %% of the printed fresh-water value at %d degC', (temperatureC, printedMgPerL) => {
    expect(Math.abs(oxygenSaturationMgPerL(0, temperatureC) / printedMgPerL - 1)).toBeLessThan(0.001);
    expect(Math.abs(bensonKrauseMgPerL(0, temperatureC) - printedMgPerL)).toBeLessThan(0.005);
  });

  it.each([15, 20, 25, 28, 30])('agrees with Benson & Krause in seawater at %d degC within 0.2 %%', (temperatureC) => {
    expect(Math.abs(oxygenSaturationMgPerL(35, temperatureC) / bensonKrauseMgPerL(35, temperatureC) - 1)).toBeLessThan(0.002);
  });

  // 206.788 umol/kg x 1.02334306 kg/L x 31.9988 g/mol.
  it('gives 6.771 mg/L for salinity 35 at 25 degC', () => {
    expect(Math.abs(oxygenSaturationMgPerL(35, 25) - 6.7714)).toBeLessThan(0.001);
  });

  it.each([
    [-1, 20],
    [43, 20],
    [35, -1],
    [35, 41],
  ])('refuses salinity %d at %d degC', (salinity, temperatureC) => {
    expect(() => oxygenSaturationUmolPerKg(salinity, temperatureC)).toThrow(RangeError);
  });
});

describe('oxygen from per cent of saturation', () => {
  // Garcia & Gordon (1992): salinity 35 at 25 degC holds 206.788 umol/kg, 6.771 mg/L.
  it.each([
    [100, 6.771],
    [95, 6.432],
    [120, 8.125],
    [0, 0],
  ])('of %d %% is %d mg/L', (percent, mgPerL) => {
    expect(Math.abs((oxygenMgPerLOfPercent(percent, 35, 25) ?? NaN) - mgPerL)).toBeLessThan(0.002);
  });

  it.each([
    [-1, 35, 25],
    [95, 43, 25],
    [95, 35, -0.5],
    [NaN, 35, 25],
  ])('is not told of %d %% at salinity %d and %d degC', (percent, salinity, temperatureC) => {
    expect(oxygenMgPerLOfPercent(percent, salinity, temperatureC)).toBeNull();
  });
});
