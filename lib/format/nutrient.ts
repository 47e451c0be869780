import { formatNumber } from './number.ts';

export type Nutrient = 'nitrate' | 'phosphate';

export interface Band {
  lowMgPerL: number;
  highMgPerL: number;
}

/** The bands that the product aims for; common practice, as mg/L of the ion. */
export const defaultBands: Record<Nutrient, Band> = {
  nitrate: { lowMgPerL: 3, highMgPerL: 10 },
  phosphate: { lowMgPerL: 0.03, highMgPerL: 0.1 },
};

export const nutrientNames: Record<Nutrient, string> = { nitrate: 'Nitrate', phosphate: 'Phosphate' };

/** Decimals that a hobby kit can tell: nitrate tenths under 10, phosphate hundredths. */
export function nutrientDecimals(nutrient: Nutrient, mgPerL: number): number {
  if (nutrient === 'phosphate') return 2;
  return mgPerL < 10 && !Number.isInteger(mgPerL) ? 1 : 0;
}

/** `12`, `0.08`, or `under 0.02` for a result below detection. */
export function formatNutrient(nutrient: Nutrient, mgPerL: number, below: boolean): string {
  const figure = formatNumber(mgPerL, nutrientDecimals(nutrient, mgPerL));
  return below ? `under ${figure}` : figure;
}

/** `3 to 10`, `0.03 to 0.10` */
export function formatBand(nutrient: Nutrient, band: Band = defaultBands[nutrient]): string {
  const decimals = nutrient === 'phosphate' ? 2 : 0;
  return `${formatNumber(band.lowMgPerL, decimals)} to ${formatNumber(band.highMgPerL, decimals)}`;
}

export type BandPlace = 'above' | 'in band' | 'below';

/**
 * Where a result lies. A result under its limit of detection is below band when the whole of what it can mean is, and in
 * band only as far as can be told: "under 5" says no more than that it is not above.
 */
export function placeInBand(mgPerL: number, below: boolean, band: Band): BandPlace {
  if (below) return mgPerL <= band.lowMgPerL ? 'below' : mgPerL <= band.highMgPerL ? 'in band' : 'above';
  if (mgPerL > band.highMgPerL) return 'above';
  return mgPerL < band.lowMgPerL ? 'below' : 'in band';
}
