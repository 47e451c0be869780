import { randomFrom, seedFor } from '../random.ts';

/** Standard deviation of what a new head really gives against what its calibration says (practice). */
const CALIBRATION_SD = 0.02;

/** mL that really leave the head for each mL that the pump counts. The pump itself cannot know it: it counts motor time. */
export function trueMlPerCountedMl(seed: number, head: number): number {
  return 1 + CALIBRATION_SD * randomFrom(seedFor(seed, `head ${head}`)).gauss();
}
