export interface Volumes {
  displayLitres: number;
  sumpLitres: number;
  displacementLitres: number;
}

/**
 * Water in a system, litres: display and sump at running level less what rock and sand displace. Null when the
 * displacement leaves no water, which is no system.
 * @example netVolumeLitres({ displayLitres: 400, sumpLitres: 80, displacementLitres: 60 }) // 420
 */
export function netVolumeLitres(volumes: Volumes): number | null {
  const netLitres = volumes.displayLitres + volumes.sumpLitres - volumes.displacementLitres;
  return netLitres > 0 ? netLitres : null;
}
