/** Abridged standard atomic weights, g/mol (IUPAC; Prohaska et al. 2022, Pure Appl. Chem. 94:573-600). */
export const atomicWeights = { H: 1.008, C: 12.011, N: 14.007, O: 15.999, P: 30.974, Ca: 40.078 } as const;
export type Element = keyof typeof atomicWeights;

/**
 * Molar mass of a formula, g/mol.
 * @example molarMass({ N: 1, O: 3 }) // nitrate: 62.004
 */
export function molarMass(formula: Partial<Record<Element, number>>): number {
  const { H = 0, C = 0, N = 0, O = 0, P = 0, Ca = 0 } = formula;
  const weights = atomicWeights;
  return H * weights.H + C * weights.C + N * weights.N + O * weights.O + P * weights.P + Ca * weights.Ca;
}
