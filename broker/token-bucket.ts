/** Lets `burst` through at once and `ratePerSecond` in the long run. */
export interface TokenBucket {
  /** Takes one token if there is one. */
  take(): boolean;
  /** Milliseconds until the next token, 0 when there is one. */
  waitMs(): number;
}

/** @param nowMs a clock that never jumps back, milliseconds. */
export function createTokenBucket(ratePerSecond: number, burst: number, nowMs: () => number): TokenBucket {
  let tokens = burst;
  let countedMs = nowMs();

  function refill(): void {
    const atMs = nowMs();
    tokens = Math.min(burst, tokens + ((atMs - countedMs) * ratePerSecond) / 1000);
    countedMs = atMs;
  }

  return {
    take() {
      refill();
      if (tokens < 1) return false;
      tokens -= 1;
      return true;
    },
    waitMs() {
      refill();
      return tokens >= 1 ? 0 : Math.ceil(((1 - tokens) * 1000) / ratePerSecond);
    },
  };
}
