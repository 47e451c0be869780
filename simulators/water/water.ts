/** What can be measured in a system at one moment. */
export interface WaterReading {
  temperatureC: number;
  ph: number;
  orpMv: number;
  conductivityMsPerCm: number;
  oxygenMgPerL: number;
  nitrateMgPerL: number;
  phosphateMgPerL: number;
  /** What is left in the bottle that the carbon head draws from, mL. */
  bottleMl: number;
  skimmerW: number;
}

/** What happens to the water at a moment. */
export type WaterEvent =
  { kind: 'carbon'; ml: number } | { kind: 'feeding' } | { kind: 'water-change'; share: number } | { kind: 'refill'; ml: number };

/**
 * A body of water that devices hang in. Everything that measures or doses knows only this, so that a physical model can take
 * the place of a simple one without any of them being touched.
 */
export interface Water {
  /** Lets time pass until then. Going back does nothing. */
  advanceTo(nowMs: number): void;
  /** Something happens at the moment that the water stands at. */
  happen(event: WaterEvent): void;
  read(): WaterReading;
  /** All of its state as JSON, for the same kind of water to go on from. */
  save(): unknown;
}
