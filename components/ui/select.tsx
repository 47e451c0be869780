import { useId } from 'react';
import { describedBy, FieldFrame } from './field-frame.tsx';

export interface SelectProps<Value extends string> {
  label: string;
  value: Value | '';
  onChange: (value: Value) => void;
  options: readonly { value: Value; label: string }[];
  /** Shown while nothing is chosen. */
  placeholder?: string;
  hint?: string;
  error?: string | null;
}

/** One of many, by the browser's own list. */
export function Select<Value extends string>({ label, value, onChange, options, placeholder, hint, error }: SelectProps<Value>) {
  const id = useId();
  return (
    <FieldFrame id={id} label={label} hint={hint} error={error}>
      <span className={error ? 'field-box field-select field-wrong' : 'field-box field-select'}>
        <select
          id={id}
          value={value}
          aria-invalid={error ? true : undefined}
          aria-describedby={describedBy(id, { hint, error })}
          onChange={(event) => {
            const chosen = options.find((option) => option.value === event.target.value);
            if (chosen !== undefined) onChange(chosen.value);
          }}
        >
          {placeholder === undefined ? null : (
            <option value="" disabled>
              {placeholder}
            </option>
          )}
          {options.map((option) => (
            <option key={option.value} value={option.value}>
              {option.label}
            </option>
          ))}
        </select>
      </span>
    </FieldFrame>
  );
}
