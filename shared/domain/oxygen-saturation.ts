import { seawaterDensityKgPerM3 } from './seawater-density.ts';
import { ipts68FromIts90 } from './temperature-scale.ts';

/** Molar mass of O2, g/mol. */
export const OXYGEN_G_PER_MOL = 31.9988;

/**
 * Oxygen dissolved at equilibrium with water-saturated air at one atmosphere, umol per kg of seawater.
 * @param salinity practical salinity, 0 to 42
 * @param temperatureC 0 to 40
 * @throws RangeError outside these ranges
 * Source: Garcia & Gordon (1992), Limnology and Oceanography 37:1307-1312, equation 8 without its misprinted extra
 * A3 Ts^2 term, fitted to the data of Benson & Krause.
 * Example: salinity 35 at 10 degC gives 274.610.
 */
export function oxygenSaturationUmolPerKg(salinity: number, temperatureC: number): number {
  if (!(salinity >= 0 && salinity <= 42)) throw new RangeError(`Oxygen saturation is defined for salinity 0 to 42, not ${salinity}`);
  if (!(temperatureC >= 0 && temperatureC <= 40))
    throw new RangeError(`Oxygen saturation is defined for 0 to 40 degC, not ${temperatureC}`);
  const ts = Math.log((298.15 - temperatureC) / (273.15 + temperatureC));
  const fresh = 5.80871 + ts * (3.20291 + ts * (4.17887 + ts * (5.10006 + ts * (-0.0986643 + ts * 3.80369))));
  const salt = -7.01577e-3 + ts * (-7.70028e-3 + ts * (-1.13864e-2 + ts * -9.51519e-3));
  return Math.exp(fresh + salinity * salt - 2.75915e-7 * salinity ** 2);
}

/**
 * The same as mg of O2 per litre, through the density of seawater.
 * @param temperatureC on ITS-90
 * Example: salinity 35 at 25 degC gives 6.771.
 */
export function oxygenSaturationMgPerL(salinity: number, temperatureC: number): number {
  const kgPerL = seawaterDensityKgPerM3(salinity, ipts68FromIts90(temperatureC)) / 1000;
  return (oxygenSaturationUmolPerKg(salinity, temperatureC) * kgPerL * OXYGEN_G_PER_MOL) / 1000;
}

/**
 * Dissolved oxygen in mg/L from a probe's per cent of saturation, or null where the saturation is not defined.
 * @param percent 100 is equilibrium with water-saturated air at one atmosphere; by day water can be above it
 * @param salinity practical salinity
 * @param temperatureC on ITS-90
 * Source: Garcia & Gordon (1992), as {@link oxygenSaturationUmolPerKg}.
 * Example: 95 % at salinity 35 and 25 degC gives 6.43.
 */
export function oxygenMgPerLOfPercent(percent: number, salinity: number, temperatureC: number): number | null {
  if (!(percent >= 0) || !(salinity >= 0 && salinity <= 42) || !(temperatureC >= 0 && temperatureC <= 40)) return null;
  return (percent / 100) * oxygenSaturationMgPerL(salinity, temperatureC);
}
