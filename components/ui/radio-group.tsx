import { useId } from 'react';

export interface RadioGroupProps<Value extends string> {
  legend: string;
  value: Value | null;
  onChange: (value: Value) => void;
  options: readonly { value: Value; label: string; hint?: string }[];
  error?: string | null;
}

/** One of a few, all in sight. Arrow keys move as in any radio group, since these are the browser's own. */
export function RadioGroup<Value extends string>({ legend, value, onChange, options, error }: RadioGroupProps<Value>) {
  const name = useId();
  return (
    <fieldset className="choices" aria-describedby={error ? `${name}-error` : undefined}>
      <legend className="field-label">{legend}</legend>
      {options.map((option) => (
        <label key={option.value} className="choice">
          <input type="radio" name={name} checked={option.value === value} onChange={() => onChange(option.value)} />
          <span>
            {option.label}
            {option.hint === undefined ? null : <span className="choice-hint">{option.hint}</span>}
          </span>
        </label>
      ))}
      {error ? (
        <span className="field-error" id={`${name}-error`}>
          {error}
        </span>
      ) : null}
    </fieldset>
  );
}
