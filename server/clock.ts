/** The only source of the current time in the server, so that tests can set it. */
export interface Clock {
  nowMs(): number;
}

export const systemClock: Clock = { nowMs: () => Date.now() };
