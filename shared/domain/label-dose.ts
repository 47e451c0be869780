/** "`ml` (up to `maxMl`) per `perLitres` of water and `perDays`", as printed on a product. */
export interface LabelDose {
  ml: number;
  maxMl: number | null;
  perLitres: number;
  perDays: number;
}

/**
 * The label's dose for a system, mL/day; of a range its lower end.
 * @example labelDoseMlPerDay({ ml: 2, maxMl: null, perLitres: 100, perDays: 1 }, 420) // 8.4
 */
export function labelDoseMlPerDay(label: LabelDose, netLitres: number): number {
  return (label.ml * netLitres) / (label.perLitres * label.perDays);
}
