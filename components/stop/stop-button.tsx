import { useHold } from './use-hold.ts';

/** The button itself: hold for a second, or press and confirm. */
export function StopButton({ onHeld, onPressed, isOpen }: { onHeld: () => void; onPressed: () => void; isOpen: boolean }) {
  const { phase, handlers } = useHold({ onHeld, onPressed });
  const hint = phase === 'holding' ? 'keep holding' : phase === 'cancelled' ? 'let go too far away: nothing was stopped' : 'hold, or press';
  return (
    <button
      type="button"
      className={`stop-button${phase === 'holding' ? ' stop-holding' : ''}`}
      aria-label="Stop dosing"
      aria-expanded={isOpen}
      {...handlers}
    >
      <span className="stop-fill" aria-hidden="true" />
      <span className="stop-mark" aria-hidden="true" />
      <span>Stop dosing</span>
      <span className="stop-button-hint">{hint}</span>
    </button>
  );
}
