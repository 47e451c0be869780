import { useEffect, useRef, type RefObject } from 'react';
import type { AxisLimits, TimeRange } from './time-axis.ts';
import { panBy, pinch, spanOf, zoomAbout } from './time-axis.ts';

export interface GestureTarget {
  readonly range: TimeRange;
  readonly limits: AxisLimits;
  /** Where the plot lies in the surface, in pixels. */
  readonly plotLeftPx: number;
  readonly plotWidthPx: number;
  readonly onRange: (range: TimeRange) => void;
  readonly onCrosshair: (tMs: number) => void;
  /** A drag began or ended: until then nothing is asked of the server. */
  readonly onHold: (isHeld: boolean) => void;
}

/** A press that moved no further, in pixels, is a tap. */
const tapSlopPx = 8;
const wheelZoomPerPx = 0.0015;

interface Finger {
  startX: number;
  x: number;
  y: number;
  startY: number;
}

/**
 * Pointer gestures on a chart. Touch: a sideways drag pans, two fingers zoom, a tap sets the crosshair; the surface has
 * `touch-action: pan-y`, so an upright drag scrolls the page and is cancelled here. Mouse: drag pans, the wheel zooms about the
 * pointer, and the crosshair follows it. Moves are gathered to one a frame.
 */
export function useChartGestures(surface: RefObject<HTMLElement | null>, target: GestureTarget): void {
  const latest = useRef(target);
  useEffect(() => {
    latest.current = target;
  });

  useEffect(() => {
    const element = surface.current;
    if (element === null) return undefined;
    const fingers = new Map<number, Finger>();
    let startRange: TimeRange | null = null;
    let didMove = false;
    let frame = 0;
    let pending: (() => void) | null = null;

    const soon = (work: () => void) => {
      pending = work;
      if (frame !== 0) return;
      frame = requestAnimationFrame(() => {
        frame = 0;
        const run = pending;
        pending = null;
        run?.();
      });
    };
    const shareOf = (clientX: number) => {
      const { plotLeftPx, plotWidthPx } = latest.current;
      return (clientX - element.getBoundingClientRect().left - plotLeftPx) / plotWidthPx;
    };
    const timeAt = (clientX: number) => {
      const { range } = latest.current;
      return range.fromMs + Math.min(Math.max(shareOf(clientX), 0), 1) * spanOf(range);
    };
    const isControl = (event: Event) =>
      event.target instanceof Element && event.target.closest('button, a, input, table, [role="region"]') !== null;

    /** A finger more or less: the drag goes on from where everything is now. */
    const restart = () => {
      startRange = latest.current.range;
      for (const finger of fingers.values()) {
        finger.startX = finger.x;
        finger.startY = finger.y;
      }
    };

    const onDown = (event: PointerEvent) => {
      if (isControl(event) || event.button !== 0) return;
      if (fingers.size === 0) didMove = false;
      fingers.set(event.pointerId, { startX: event.clientX, x: event.clientX, startY: event.clientY, y: event.clientY });
      restart();
    };
    const onMove = (event: PointerEvent) => {
      const finger = fingers.get(event.pointerId);
      if (finger === undefined) {
        if (event.pointerType === 'mouse' && event.buttons === 0 && !isControl(event))
          soon(() => latest.current.onCrosshair(timeAt(event.clientX)));
        return;
      }
      finger.x = event.clientX;
      finger.y = event.clientY;
      if (Math.hypot(finger.x - finger.startX, finger.y - finger.startY) > tapSlopPx && !didMove) {
        didMove = true;
        latest.current.onHold(true);
        // From here on the drag is the chart's, also when it leaves the surface.
        element.setPointerCapture(event.pointerId);
      }
      const from = startRange;
      if (!didMove || from === null) return;
      soon(() => {
        const { limits, plotWidthPx, onRange } = latest.current;
        const [first, second] = [...fingers.values()];
        if (first === undefined) return;
        if (second === undefined) onRange(panBy(from, (-(first.x - first.startX) / plotWidthPx) * spanOf(from), limits));
        else onRange(pinch(from, [shareOf(first.startX), shareOf(second.startX)], [shareOf(first.x), shareOf(second.x)], limits));
      });
    };
    const onUp = (event: PointerEvent) => {
      if (!fingers.delete(event.pointerId)) return;
      if (fingers.size === 0 && !didMove) latest.current.onCrosshair(timeAt(event.clientX));
      if (fingers.size === 0) latest.current.onHold(false);
      restart();
    };
    const onCancel = (event: PointerEvent) => {
      fingers.delete(event.pointerId);
      didMove = true;
      if (fingers.size === 0) latest.current.onHold(false);
      restart();
    };
    const onWheel = (event: WheelEvent) => {
      if (isControl(event)) return;
      event.preventDefault();
      const { range, limits, plotWidthPx, onRange } = latest.current;
      if (Math.abs(event.deltaX) > Math.abs(event.deltaY)) onRange(panBy(range, (event.deltaX / plotWidthPx) * spanOf(range), limits));
      else onRange(zoomAbout(range, Math.exp(event.deltaY * wheelZoomPerPx), timeAt(event.clientX), limits));
    };

    element.addEventListener('pointerdown', onDown);
    element.addEventListener('pointermove', onMove);
    element.addEventListener('pointerup', onUp);
    element.addEventListener('pointercancel', onCancel);
    // Not passive: the wheel zooms here and must not scroll the page as well.
    element.addEventListener('wheel', onWheel, { passive: false });
    return () => {
      cancelAnimationFrame(frame);
      element.removeEventListener('pointerdown', onDown);
      element.removeEventListener('pointermove', onMove);
      element.removeEventListener('pointerup', onUp);
      element.removeEventListener('pointercancel', onCancel);
      element.removeEventListener('wheel', onWheel);
    };
  }, [surface]);
}
