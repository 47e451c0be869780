/** "`ml` (up to `maxMl`) per `perLitres` of water and `perDays`", as printed on a product. */
export interface LabelDose {
  ml: number;
  maxMl: number | null;
  perLitres: number;
  perDays: number;
}

/** Where no label says a ceiling, mg of carbon per litre of water and day: the project's own choice. */
export const CARBON_CEILING_MG_PER_L_DAY = 3;

/**
 * The label's dose for a system, mL/day; of a range its lower end.
 * @example labelDoseMlPerDay({ ml: 2, maxMl: null, perLitres: 100, perDays: 1 }, 420) // 8.4
 */
export function labelDoseMlPerDay(label: LabelDose, netLitres: number): number {
  return (label.ml * netLitres) / (label.perLitres * label.perDays);
}

/**
 * The most that a system should get, mL/day: the label's upper end; without a label the ceiling by carbon; null when
 * neither label nor composition tells.
 * @example doseCeilingMlPerDay({ label: null, carbonMgPerMl: 164.6, netLitres: 420 }) // 7.65
 */
export function doseCeilingMlPerDay(product: { label: LabelDose | null; carbonMgPerMl: number | null; netLitres: number }): number | null {
  const { label, carbonMgPerMl, netLitres } = product;
  if (label !== null) return labelDoseMlPerDay({ ...label, ml: label.maxMl ?? label.ml }, netLitres);
  if (carbonMgPerMl === null || carbonMgPerMl <= 0) return null;
  return (CARBON_CEILING_MG_PER_L_DAY * netLitres) / carbonMgPerMl;
}
