import { useId, useState, type Ref } from 'react';
import { parseDecimal, parseDecimalSentence } from '../../lib/parse-decimal.ts';
import { describedBy, FieldFrame } from './field-frame.tsx';

export interface DecimalFieldProps {
  label: string;
  /** What was typed, as typed: nothing is lost or rewritten under the finger. */
  text: string;
  onChange: (text: string) => void;
  hint?: string;
  /** An error from outside, such as the server's; what cannot be read is said by the field itself once it is left. */
  error?: string | null;
  unit?: string;
  required?: boolean;
  ref?: Ref<HTMLInputElement>;
}

/** What was understood of what was typed. */
function echoOf(text: string, unit: string | undefined): string | null {
  const parsed = parseDecimal(text);
  if (!parsed.ok) return null;
  return `Read as ${parsed.value}${unit === undefined ? '' : ` ${unit}`}`;
}

/** A number with decimals. Read it with `parseDecimal(text)`: comma and point both count, and what was read is said back. */
export function DecimalField({ label, text, onChange, hint, error, unit, required, ref }: DecimalFieldProps) {
  const id = useId();
  const [left, setLeft] = useState(false);
  const [typed, setTyped] = useState(false);
  const parsed = parseDecimal(text);
  const unread = left && !parsed.ok && parsed.why !== 'empty' ? parseDecimalSentence(parsed.why, text) : null;
  const shownError = error || unread;
  const echo = shownError || !typed ? null : echoOf(text, unit);
  return (
    <FieldFrame id={id} label={label} hint={hint} error={shownError} echo={echo}>
      <span className={shownError ? 'field-box field-wrong' : 'field-box'}>
        <input
          id={id}
          ref={ref}
          className="figures"
          type="text"
          inputMode="decimal"
          autoComplete="off"
          required={required}
          value={text}
          aria-invalid={shownError ? true : undefined}
          aria-describedby={describedBy(id, { hint, error: shownError, echo })}
          onChange={(event) => {
            setTyped(true);
            onChange(event.target.value);
          }}
          onBlur={() => setLeft(true)}
        />
        {unit === undefined ? null : <span className="field-unit">{unit}</span>}
      </span>
    </FieldFrame>
  );
}
