import type { Clock } from '../clock.ts';
import { TooManyError } from '../errors.ts';

export interface AttemptLimit {
  /** Counts an attempt. @throws {TooManyError} when the key used up its attempts. */
  take(key: string): void;
  /** Forgets the attempts of a key, after one that was right. */
  forgive(key: string): void;
}

/** Attempts a key may make within a window that starts with its first. Bounded: at most `mostKeys` are remembered. */
export function createAttemptLimit(clock: Clock, limit: { attempts: number; windowMs: number; mostKeys?: number }): AttemptLimit {
  const windows = new Map<string, { untilMs: number; attempts: number }>();
  const mostKeys = limit.mostKeys ?? 10_000;

  function makeRoom(nowMs: number): void {
    for (const [key, window] of windows) if (window.untilMs <= nowMs) windows.delete(key);
    for (const key of windows.keys()) {
      if (windows.size < mostKeys) break;
      windows.delete(key);
    }
  }

  return {
    take(key) {
      const nowMs = clock.nowMs();
      let window = windows.get(key);
      if (window === undefined || window.untilMs <= nowMs) {
        if (windows.size >= mostKeys) makeRoom(nowMs);
        window = { untilMs: nowMs + limit.windowMs, attempts: 0 };
        windows.set(key, window);
      }
      window.attempts += 1;
      if (window.attempts <= limit.attempts) return;
      const seconds = Math.ceil((window.untilMs - nowMs) / 1000);
      throw new TooManyError(`Too many attempts: try again in ${Math.ceil(seconds / 60)} min`, seconds);
    },
    forgive: (key) => void windows.delete(key),
  };
}
