import { atomicWeights, molarMass } from '../units/atomic-weights.ts';

/** A part of a product: its share by volume at 20 degC, or its mass in a litre of product. */
export type ProductPart = { substance: Substance } & ({ percentByVolume: number } | { gramsPerLitre: number });

type Substance = Organic | 'water' | 'other';
type Organic = 'ethanol' | 'methanol' | 'acetic-acid' | 'glucose' | 'sucrose';

interface OrganicFacts {
  C: number;
  H: number;
  O: number;
  /** Mass of a litre of the pure substance at 20 degC, g. */
  gramsPerLitre: number;
  /** A solid has no share by volume in a solution. */
  isLiquid: boolean;
}

/** Densities at 20 degC: ethanol from OIML R 22 (1973), the others from the CRC Handbook of Chemistry and Physics. */
const organics: Record<Organic, OrganicFacts> = {
  ethanol: { C: 2, H: 6, O: 1, gramsPerLitre: 789.24, isLiquid: true },
  methanol: { C: 1, H: 4, O: 1, gramsPerLitre: 791.4, isLiquid: true },
  'acetic-acid': { C: 2, H: 4, O: 2, gramsPerLitre: 1049.2, isLiquid: true },
  glucose: { C: 6, H: 12, O: 6, gramsPerLitre: 1562, isLiquid: false },
  sucrose: { C: 12, H: 22, O: 11, gramsPerLitre: 1580.5, isLiquid: false },
};

export interface ProductStrength {
  /** Oxygen that complete oxidation of a millilitre of product takes, mg O2. */
  oxygenDemandMgPerMl: number;
  carbonMgPerMl: number;
}

/** Mass of a part in a millilitre of product, mg; null for a solid given by volume. */
function massMgPerMl(part: ProductPart, facts: OrganicFacts): number | null {
  if ('gramsPerLitre' in part) return part.gramsPerLitre;
  // % vol is the volume of the pure liquid at 20 degC in 100 volumes of product, whatever the mixture shrinks to.
  return facts.isLiquid ? (part.percentByVolume / 100) * facts.gramsPerLitre : null;
}

/**
 * Theoretical oxygen demand and carbon of a product from its composition; what the parts leave over is taken as water.
 * CnHaOb takes n + a/4 - b/2 moles of O2. Null when the composition is empty, or has a part that does not tell.
 * @example productStrength([{ substance: 'ethanol', percentByVolume: 40 }])
 * // { oxygenDemandMgPerMl: 657.8, carbonMgPerMl: 164.6 }
 */
export function productStrength(composition: readonly ProductPart[]): ProductStrength | null {
  if (composition.length === 0) return null;
  const strength: ProductStrength = { oxygenDemandMgPerMl: 0, carbonMgPerMl: 0 };
  for (const part of composition) {
    if (part.substance === 'water') continue;
    if (part.substance === 'other') return null;
    const facts = organics[part.substance];
    const massMg = massMgPerMl(part, facts);
    if (massMg === null) return null;
    const moles = massMg / molarMass({ C: facts.C, H: facts.H, O: facts.O });
    strength.oxygenDemandMgPerMl += moles * (facts.C + facts.H / 4 - facts.O / 2) * 2 * atomicWeights.O;
    strength.carbonMgPerMl += moles * facts.C * atomicWeights.C;
  }
  return strength;
}

/** Why a part cannot be: a solid given by volume, or more of it in a litre than a litre of it weighs; null when it can. */
export function partProblem(part: ProductPart): 'solid-by-volume' | 'denser-than-pure' | null {
  if (part.substance === 'other' || part.substance === 'water') return null;
  const facts = organics[part.substance];
  if ('percentByVolume' in part) return facts.isLiquid ? null : 'solid-by-volume';
  return part.gramsPerLitre > facts.gramsPerLitre ? 'denser-than-pure' : null;
}
