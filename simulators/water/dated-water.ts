import type { Water, WaterEvent } from './water.ts';

export interface DatedWater extends Water {
  /** Something happens to the water at a time; it takes effect once the water has come to it. */
  happenAt(atMs: number, event: WaterEvent): void;
}

const DAY_MS = 86_400_000;

/** Water with things that happen to it at their own times, and with one feeding a day. */
export function createDatedWater(water: Water, startMs: number, feedingUtcH: number): DatedWater {
  let pending: { atMs: number; event: WaterEvent }[] = [];
  const feedingMs = feedingUtcH * 3_600_000;
  let nextFeedingMs = Math.ceil((startMs - feedingMs) / DAY_MS) * DAY_MS + feedingMs;

  return {
    ...water,
    advanceTo(nowMs) {
      for (; nextFeedingMs <= nowMs; nextFeedingMs += DAY_MS) pending.push({ atMs: nextFeedingMs, event: { kind: 'feeding' } });
      const due = pending.filter((one) => one.atMs <= nowMs).sort((a, b) => a.atMs - b.atMs);
      if (due.length > 0) pending = pending.filter((one) => one.atMs > nowMs);
      for (const { atMs, event } of due) {
        water.advanceTo(atMs);
        water.happen(event);
      }
      water.advanceTo(nowMs);
    },
    happenAt: (atMs, event) => void pending.push({ atMs, event }),
  };
}
