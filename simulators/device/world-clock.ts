/**
 * The time that a simulated device lives in. At speed 1 it is the wall clock. A faster one starts in the past and runs until it
 * has caught up with the wall clock, and is the wall clock from then on: what is sent never comes from the future, and a
 * receiver sees it as a buffer that is uploaded late.
 */
export interface WorldClock {
  nowMs(): number;
  /** Wall milliseconds until this much of the world's time has passed. */
  wallMsFor(worldMs: number): number;
}

export interface WorldClockOptions {
  /** Where the world starts; the present when left out. */
  fromMs?: number;
  /** 1 or more. */
  speed: number;
  wallNowMs(): number;
}

export function createWorldClock({ fromMs, speed, wallNowMs }: WorldClockOptions): WorldClock {
  const startMs = wallNowMs();
  const worldStartMs = Math.min(fromMs ?? startMs, startMs);
  const runningMs = (wallMs: number) => worldStartMs + (wallMs - startMs) * speed;
  return {
    nowMs() {
      const wallMs = wallNowMs();
      return Math.min(wallMs, runningMs(wallMs));
    },
    wallMsFor(worldMs) {
      const wallMs = wallNowMs();
      return runningMs(wallMs) >= wallMs ? worldMs : worldMs / speed;
    },
  };
}
