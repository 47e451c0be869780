/** A volume at the time at which it counts. */
export interface VolumeAt {
  atMs: number;
  ml: number;
}

/** A window that closed longer ago than this is recorded, and neither calls nor stops anybody. */
export const OPEN_WINDOW_MS = 600_000;

/** A slot begins within this of its due time, or is skipped for good by the pump. */
export const SLOT_GRACE_MS = 60_000;

/** Volumes over time, summed by binary search, so that many window ends cost little. */
export interface VolumeTimeline {
  /** Sum of what counts after `fromMs` and up to `toMs` inclusive, mL. */
  sumMl(fromMs: number, toMs: number): number;
  /** The times at which something counts, ascending. */
  readonly instantsMs: readonly number[];
}

/** @param entries in any order; corrections are negative volumes. */
export function volumeTimeline(entries: readonly VolumeAt[]): VolumeTimeline {
  const sorted = [...entries].sort((a, b) => a.atMs - b.atMs);
  const instantsMs = sorted.map((entry) => entry.atMs);
  const sums = [0];
  let totalMl = 0;
  for (const entry of sorted) {
    totalMl += entry.ml;
    sums.push(totalMl);
  }
  const upTo = (atMs: number) => sums[countUpTo(instantsMs, atMs)] ?? 0;
  return { instantsMs, sumMl: (fromMs, toMs) => upTo(toMs) - upTo(fromMs) };
}

/**
 * When a delivery counts: a scheduled portion at its due time, on both sides of the comparison; everything else at its own.
 * What a run gives although it did not begin when it claims to have been due (a pump may be wrong about that), or long
 * after, counts at its own time: else a burst or a motor that never stops could hide in a window that closed long ago.
 */
export function countedAtMs(delivery: { atMs: number; begunMs: number; dueMs: number | null }): number {
  const { atMs, begunMs, dueMs } = delivery;
  if (dueMs === null || Math.abs(begunMs - dueMs) > 2 * SLOT_GRACE_MS) return atMs;
  return Math.abs(atMs - dueMs) <= OPEN_WINDOW_MS ? dueMs : atMs;
}

/**
 * The ends of the windows that still count: now, and each instant later than `openFromMs`. Instants ahead of now
 * count too: a pump whose clock runs a little ahead reports what is in the water already.
 */
export function openWindowEndsMs(instantsMs: readonly number[], openFromMs: number, nowMs: number): number[] {
  const ends = new Set(instantsMs.filter((atMs) => atMs > openFromMs));
  ends.add(nowMs);
  return [...ends].sort((a, b) => a - b);
}

/** True for the end of a window that is recorded only. */
export function isWindowClosed(endMs: number, nowMs: number): boolean {
  return endMs <= nowMs - OPEN_WINDOW_MS;
}

/** How many of the ascending `instantsMs` are at or before `atMs`. */
function countUpTo(instantsMs: readonly number[], atMs: number): number {
  let low = 0;
  let high = instantsMs.length;
  while (low < high) {
    const middle = (low + high) >>> 1;
    if ((instantsMs[middle] ?? Infinity) <= atMs) low = middle + 1;
    else high = middle;
  }
  return low;
}
