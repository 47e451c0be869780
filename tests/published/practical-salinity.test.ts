import { describe, expect, it } from 'vitest';
import { practicalSalinity, salinityFromRatio } from '#shared/domain/practical-salinity.ts';

describe('practical salinity', () => {
  // Fofonoff & Millard (1983), UNESCO Technical Papers in Marine Science 44, p. 9: the three check values.
  it.each([
    { ratio: 1, temperatureC: 15, pressureDbar: 0, salinity: 35.0 },
    { ratio: 1.2, temperatureC: 20, pressureDbar: 2000, salinity: 37.245628 },
    { ratio: 0.65, temperatureC: 5, pressureDbar: 1500, salinity: 27.995347 },
  ])('gives $salinity for R $ratio at $temperatureC degC and $pressureDbar dbar', ({ ratio, temperatureC, pressureDbar, salinity }) => {
    expect(Math.abs(salinityFromRatio(ratio, temperatureC, pressureDbar) - salinity)).toBeLessThan(1e-6);
  });

  // The same, pp. 13-14: conductivity ratio by salinity and temperature (single precision in print, so 2e-6 in R).
  it.each([
    [30, 0, 0.58822],
    [30, 10, 0.772567],
    [30, 20, 0.972727],
    [30, 30, 1.185361],
    [35, 0, 0.67661],
    [35, 10, 0.887529],
    [35, 20, 1.116493],
    [35, 30, 1.359679],
    [40, 0, 0.763298],
    [40, 10, 1.000073],
    [40, 30, 1.529967],
  ])('gives %d at %d degC for R %d', (salinity, temperatureC, ratio) => {
    expect(Math.abs(salinityFromRatio(ratio, temperatureC) - salinity)).toBeLessThan(1e-4);
  });

  // R package marelac, documentation of convert_RtoS: R 0.6990725 at 10 degC and the surface gives 26.8609.
  it('agrees with an independent implementation below standard salinity', () => {
    expect(salinityFromRatio(0.6990725, 10)).toBeCloseTo(26.8609, 3);
  });

  // Computed with the GSW-C toolbox (gsw_C_from_SP), which takes ITS-90: catches a forgotten temperature scale.
  it.each([
    [53.071, 25, 35],
    [50.3632, 25, 33],
    [47.918, 20, 35],
    [58.357, 30, 35],
  ])('reads %d mS/cm at %d degC (ITS-90) as %d', (conductivityMsPerCm, temperatureC, salinity) => {
    expect(practicalSalinity(conductivityMsPerCm, temperatureC)).toBeCloseTo(salinity, 3);
  });

  it.each([
    ['a probe in air', 0.01, 25],
    ['no conductivity at all', 0, 25],
    ['fresh water', 1.4, 25],
    ['water hotter than the scale', 60, 36],
    ['brine', 80, 25],
    ['no temperature', 53, Number.NaN],
  ])('says that it cannot tell for %s', (_case, conductivityMsPerCm, temperatureC) => {
    expect(practicalSalinity(conductivityMsPerCm, temperatureC)).toBeNull();
  });
});
