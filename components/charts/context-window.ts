import type { AxisLimits, TimeRange } from './time-axis.ts';
import { clampRange, panBy } from './time-axis.ts';

/** Which part of the window is held: an end, its inside, or a place beside it. */
export type Grip = 'start' | 'end' | 'inside' | 'outside';

/** Ends can be caught from this far, so that a finger gets them. */
const endReachPx = 14;

export function gripAt(x: number, window: { left: number; right: number }): Grip {
  const isNarrow = window.right - window.left < 3 * endReachPx;
  // A narrow window is moved by its inside; its ends are caught from outside.
  const inward = isNarrow ? 0 : endReachPx;
  if (x >= window.left - endReachPx && x <= window.left + inward && (!isNarrow || x < window.left)) return 'start';
  if (x <= window.right + endReachPx && x >= window.right - inward && (!isNarrow || x > window.right)) return 'end';
  return x > window.left && x < window.right ? 'inside' : 'outside';
}

/** The range after its window was dragged by `deltaMs` on a grip; a press beside it brings its middle to `pressedMs`. */
export function dragWindow(range: TimeRange, grip: Grip, deltaMs: number, pressedMs: number, limits: AxisLimits): TimeRange {
  switch (grip) {
    case 'inside':
      return panBy(range, deltaMs, limits);
    case 'outside':
      return panBy(range, pressedMs - (range.fromMs + range.toMs) / 2 + deltaMs, limits);
    case 'start': {
      const fromMs = Math.min(range.fromMs + deltaMs, range.toMs - limits.minSpanMs);
      return clampRange({ fromMs: Math.max(fromMs, range.toMs - limits.maxSpanMs), toMs: range.toMs }, limits);
    }
    case 'end': {
      const toMs = Math.max(range.toMs + deltaMs, range.fromMs + limits.minSpanMs);
      return clampRange({ fromMs: range.fromMs, toMs: Math.min(toMs, range.fromMs + limits.maxSpanMs, limits.latestMs) }, limits);
    }
  }
}
