import { ipts68FromIts90 } from './temperature-scale.ts';

/**
 * Conductivity of seawater of salinity 35 at 15 degC (IPTS-68) and the sea surface, mS/cm.
 * A convention beside PSS-78, which itself is defined on ratios only.
 */
export const STANDARD_CONDUCTIVITY_MS_PER_CM = 42.914;

/** Ranges in which PSS-78 is defined. */
export const SALINITY_RANGE = { least: 2, most: 42 } as const;
export const SALINITY_TEMPERATURE_RANGE_C = { least: -2, most: 35 } as const;

const a = [0.008, -0.1692, 25.3851, 14.0941, -7.0261, 2.7081];
const b = [0.0005, -0.0056, -0.0066, -0.0375, 0.0636, -0.0144];
const c = [0.6766097, 2.00564e-2, 1.104259e-4, -6.9698e-7, 1.0031e-9];

function polynomial(coefficients: readonly number[], x: number): number {
  return coefficients.reduceRight((sum, coefficient) => sum * x + coefficient, 0);
}

/**
 * Practical salinity (PSS-78, no unit) from the conductivity ratio R = C(S, t, p) / C(35, 15, 0).
 * @param ratio R, no unit, above 0
 * @param temperatureC on IPTS-68
 * @param pressureDbar above the atmosphere's; 0 at the surface
 * Source: Fofonoff & Millard (1983), UNESCO Technical Papers in Marine Science 44, p. 6-8.
 * Example: R 1, 15 degC, 0 dbar gives 35.
 */
export function salinityFromRatio(ratio: number, temperatureC: number, pressureDbar = 0): number {
  const pressureTerm = pressureDbar * (2.07e-5 + pressureDbar * (-6.37e-10 + pressureDbar * 3.989e-15));
  const rp = 1 + pressureTerm / (1 + 3.426e-2 * temperatureC + 4.464e-4 * temperatureC ** 2 + (4.215e-1 - 3.107e-3 * temperatureC) * ratio);
  const rootRt = Math.sqrt(ratio / (rp * polynomial(c, temperatureC)));
  const offset15 = temperatureC - 15;
  return polynomial(a, rootRt) + (offset15 / (1 + 0.0162 * offset15)) * polynomial(b, rootRt);
}

/**
 * Practical salinity at the surface, as a probe measures it, or null where PSS-78 is not defined: a probe in air or fresh
 * water, or water outside -2 to 35 degC.
 * @param conductivityMsPerCm not temperature-compensated
 * @param temperatureC on ITS-90, as thermometers read today
 */
export function practicalSalinity(conductivityMsPerCm: number, temperatureC: number): number | null {
  if (!(conductivityMsPerCm > 0)) return null;
  if (!(temperatureC >= SALINITY_TEMPERATURE_RANGE_C.least && temperatureC <= SALINITY_TEMPERATURE_RANGE_C.most)) return null;
  const salinity = salinityFromRatio(conductivityMsPerCm / STANDARD_CONDUCTIVITY_MS_PER_CM, ipts68FromIts90(temperatureC));
  return salinity >= SALINITY_RANGE.least && salinity <= SALINITY_RANGE.most ? salinity : null;
}
