import { labelDoseMlPerDay, type LabelDose } from './label-dose.ts';

/** Where no label says a ceiling, mg of carbon per litre of water and day: this project's own choice. */
const UNLABELLED_CARBON_MG_PER_L_DAY = 3;

/**
 * The most of a product that a system should get in a day, mL: the label's upper end for the net volume; without a label
 * 3 mg of carbon per litre and day; null when neither label nor composition tells.
 *
 * @example doseCeilingMlPerDay({ label: null, carbonMgPerMl: 164.6, netLitres: 420 }) // 7.65
 */
export function doseCeilingMlPerDay(product: { label: LabelDose | null; carbonMgPerMl: number | null; netLitres: number }): number | null {
  const { label, carbonMgPerMl, netLitres } = product;
  if (label !== null) return labelDoseMlPerDay({ ...label, ml: label.maxMl ?? label.ml }, netLitres);
  if (carbonMgPerMl === null || carbonMgPerMl <= 0) return null;
  return (UNLABELLED_CARBON_MG_PER_L_DAY * netLitres) / carbonMgPerMl;
}
