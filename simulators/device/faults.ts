/** What is wrong with a device for now. Set from outside, and lasting through its restarts. */
export interface Faults {
  /** Heads whose relay does not open any more: a run goes on past its volume until a stop order. */
  stuckHeads: number[];
  /** Orders are heard and neither obeyed nor answered. */
  isSilent: boolean;
  isClockUnset: boolean;
}

export const noFaults = (): Faults => ({ stuckHeads: [], isSilent: false, isClockUnset: false });
