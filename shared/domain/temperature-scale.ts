/**
 * Temperature on the IPTS-68 scale, degC, from one on ITS-90. PSS-78 and EOS-80 are fitted on IPTS-68; leaving the step out
 * moves a salinity of 35 by about 0.005.
 * Source: Saunders (1990), WOCE Newsletter 10; t68 = 1.00024 t90.
 */
export function ipts68FromIts90(its90C: number): number {
  return 1.00024 * its90C;
}
