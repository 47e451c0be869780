import { useId } from 'react';
import { parseDecimal, parseDecimalSentence } from '../../lib/parse-decimal.ts';
import { describedBy, FieldFrame } from './field-frame.tsx';

export interface StepperProps {
  label: string;
  /** What was typed or stepped to, as text; empty when nothing is chosen yet. */
  text: string;
  onChange: (text: string) => void;
  step: number;
  /** Decimals that a step writes. */
  decimals: number;
  min?: number;
  /** Where the first step goes from when the field is empty, such as the last value. */
  startAt?: number;
  unit?: string;
  hint?: string;
  error?: string | null;
}

/** A number with a button at each side, 56 px high: for a wet thumb. */
export function Stepper({ label, text, onChange, step, decimals, min = 0, startAt = min, unit, hint, error }: StepperProps) {
  const id = useId();
  const parsed = parseDecimal(text);
  const unread = !parsed.ok && parsed.why !== 'empty' ? parseDecimalSentence(parsed.why, text) : null;
  const shownError = error || unread;
  const echo = parsed.ok && text.includes(',') ? `Read as ${parsed.value}${unit === undefined ? '' : ` ${unit}`}` : null;
  const move = (by: number) => {
    const next = parsed.ok ? parsed.value + by : startAt;
    onChange(Math.max(min, next).toFixed(decimals));
  };
  return (
    <FieldFrame id={id} label={label} hint={hint} error={shownError} echo={echo}>
      <span className="stepper">
        <button type="button" className="button button-secondary" aria-label={`${label}: less`} onClick={() => move(-step)}>
          {'\u2212'}
        </button>
        <span className={shownError ? 'field-box field-wrong' : 'field-box'}>
          <input
            id={id}
            className="figures"
            type="text"
            inputMode="decimal"
            autoComplete="off"
            value={text}
            aria-invalid={shownError ? true : undefined}
            aria-describedby={describedBy(id, { hint, error: shownError, echo })}
            onChange={(event) => onChange(event.target.value)}
          />
          {unit === undefined ? null : <span className="field-unit">{unit}</span>}
        </span>
        <button type="button" className="button button-secondary" aria-label={`${label}: more`} onClick={() => move(step)}>
          +
        </button>
      </span>
    </FieldFrame>
  );
}
