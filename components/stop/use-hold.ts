import { useEffect, useRef, useState, type PointerEvent } from 'react';

/** How long a hold lasts, in milliseconds, and how far a finger may drift meanwhile, in CSS pixels. */
export const holdMs = 1000;
export const driftPx = 24;

interface Parts {
  /** Held long enough. */
  onHeld: () => void;
  /** Pressed and let go, or by keyboard or screen reader: ask once more. */
  onPressed: () => void;
}

/**
 * A button that acts when held for a second. Letting go earlier is a press; drifting away cancels, visibly. Keyboard and
 * screen readers click, which is a press.
 */
export function useHold({ onHeld, onPressed }: Parts) {
  const [phase, setPhase] = useState<'idle' | 'holding' | 'cancelled'>('idle');
  const timer = useRef<ReturnType<typeof setTimeout> | null>(null);
  const start = useRef({ x: 0, y: 0 });
  /** Set when a gesture is over and done, so that the click which the browser sends after it does nothing more. */
  const skipClick = useRef(false);

  function clear(): void {
    if (timer.current !== null) clearTimeout(timer.current);
    timer.current = null;
  }
  useEffect(() => clear, []);

  function end(next: 'idle' | 'cancelled'): void {
    clear();
    setPhase(next);
  }

  return {
    phase,
    handlers: {
      onPointerDown(event: PointerEvent<HTMLButtonElement>) {
        if (event.button !== 0) return;
        skipClick.current = false;
        start.current = { x: event.clientX, y: event.clientY };
        setPhase('holding');
        clear();
        timer.current = setTimeout(() => {
          skipClick.current = true;
          end('idle');
          onHeld();
        }, holdMs);
      },
      onPointerMove(event: PointerEvent<HTMLButtonElement>) {
        if (timer.current === null) return;
        const drift = Math.hypot(event.clientX - start.current.x, event.clientY - start.current.y);
        if (drift <= driftPx) return;
        skipClick.current = true;
        end('cancelled');
      },
      onPointerUp() {
        if (timer.current !== null) end('idle');
      },
      onPointerCancel() {
        if (timer.current === null) return;
        skipClick.current = true;
        end('cancelled');
      },
      onContextMenu(event: { preventDefault(): void }) {
        // A long press is the hold, not a menu.
        event.preventDefault();
      },
      onClick() {
        const wasGesture = skipClick.current;
        skipClick.current = false;
        if (!wasGesture) onPressed();
      },
    },
  };
}
