/**
 * Density of seawater at one atmosphere, kg/m3.
 * @param salinity practical salinity, 0 to 42
 * @param temperatureC on IPTS-68, -2 to 40
 * @throws RangeError outside these ranges
 * Source: Millero & Poisson (1981), Deep-Sea Research 28A:625-629, as printed in UNESCO Technical Papers 44, p. 17.
 * Example: salinity 35 at 25 degC gives 1023.34306.
 */
export function seawaterDensityKgPerM3(salinity: number, temperatureC: number): number {
  if (!(salinity >= 0 && salinity <= 42)) throw new RangeError(`EOS-80 is defined for salinity 0 to 42, not ${salinity}`);
  if (!(temperatureC >= -2 && temperatureC <= 40)) throw new RangeError(`EOS-80 is defined for -2 to 40 degC, not ${temperatureC}`);
  const t = temperatureC;
  const pureWater = 999.842594 + t * (6.793952e-2 + t * (-9.09529e-3 + t * (1.001685e-4 + t * (-1.120083e-6 + t * 6.536332e-9))));
  const perSalinity = 0.824493 + t * (-4.0899e-3 + t * (7.6438e-5 + t * (-8.2467e-7 + t * 5.3875e-9)));
  const perRoot = -5.72466e-3 + t * (1.0227e-4 - t * 1.6546e-6);
  return pureWater + salinity * perSalinity + salinity ** 1.5 * perRoot + 4.8314e-4 * salinity ** 2;
}
