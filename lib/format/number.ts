/** Written instead of a number that is not one: a figure is never "NaN". */
export const noFigure = 'no reading';

/** A number with exactly `decimals` decimals and a point, or the words for none. A minus sign is a real one. */
export function formatNumber(value: number | null | undefined, decimals: number): string {
  if (value === null || value === undefined || !Number.isFinite(value)) return noFigure;
  const text = value.toFixed(decimals);
  const isZero = Number(text) === 0;
  return isZero ? text.replace('-', '') : text.replace('-', '\u2212');
}

/** Decimals so that a reader sees about three digits: for quantities of unknown resolution. */
export function decimalsFor(value: number): number {
  const magnitude = Math.abs(value);
  if (!Number.isFinite(magnitude) || magnitude >= 100) return 0;
  if (magnitude >= 10) return 1;
  return 2;
}
