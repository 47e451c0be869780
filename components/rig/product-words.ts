import type { Product } from '#shared/contract/products.ts';
import { decimalsFor, formatNumber } from '../../lib/format/number.ts';

/** `2 mL per 100 L and day` */
export function labelWords(product: Product): string {
  const { label } = product;
  if (label === null) return 'No label dose.';
  const dose = label.maxMl === null ? `${label.ml}` : `${label.ml} to ${label.maxMl}`;
  const per = label.perDays === 1 ? 'day' : `${label.perDays} days`;
  return `Label: ${dose} mL per ${label.perLitres} L and ${per}.`;
}

/** `Carbon 165 mg/mL, oxygen demand 658 mg/mL` */
export function strengthWords(product: Product): string {
  if (product.oxygenDemandMgPerMl === null || product.carbonMgPerMl === null) return 'Strength unknown: its composition does not tell.';
  const figure = (mgPerMl: number) => `${formatNumber(mgPerMl, decimalsFor(mgPerMl))} mg/mL`;
  return `Carbon ${figure(product.carbonMgPerMl)}, oxygen demand ${figure(product.oxygenDemandMgPerMl)}.`;
}
