import { formatNumber } from './number.ts';

/** Decimals that a dosing pump can mean: hundredths under 1 mL, tenths under 100, whole above. */
export function millilitreDecimals(ml: number): number {
  const magnitude = Math.abs(ml);
  if (magnitude >= 100) return 0;
  return magnitude >= 1 || magnitude === 0 ? 1 : 2;
}

/** `3.5 mL` */
export function formatMl(ml: number): string {
  return `${formatNumber(ml, millilitreDecimals(ml))} mL`;
}

/** `3.5 of 6.0 mL`: both rounded as the larger. */
export function formatMlOf(givenMl: number, plannedMl: number): string {
  const decimals = millilitreDecimals(Math.max(Math.abs(givenMl), Math.abs(plannedMl)));
  return `${formatNumber(givenMl, decimals)} of ${formatNumber(plannedMl, decimals)} mL`;
}
