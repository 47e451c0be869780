import { useId, type Ref } from 'react';
import { describedBy, FieldFrame } from './field-frame.tsx';

export interface FieldProps {
  label: string;
  value: string;
  onChange: (value: string) => void;
  onBlur?: () => void;
  hint?: string;
  error?: string | null;
  /** Stands at the end of the field. */
  unit?: string;
  type?: 'text' | 'email' | 'password' | 'datetime-local' | 'date' | 'time';
  inputMode?: 'text' | 'email' | 'numeric';
  autoComplete?: string;
  required?: boolean;
  /** More than one line. */
  lines?: number;
  maxLength?: number;
  ref?: Ref<HTMLInputElement>;
}

/** A text field. For a number use `DecimalField`. */
export function Field({
  label,
  value,
  onChange,
  onBlur,
  hint,
  error,
  unit,
  type = 'text',
  inputMode,
  autoComplete,
  required,
  lines,
  maxLength,
  ref,
}: FieldProps) {
  const id = useId();
  const shared = {
    id,
    value,
    onBlur,
    autoComplete,
    required,
    maxLength,
    'aria-invalid': error ? true : undefined,
    'aria-describedby': describedBy(id, { hint, error }),
  };
  return (
    <FieldFrame id={id} label={label} hint={hint} error={error}>
      <span className={error ? 'field-box field-wrong' : 'field-box'}>
        {lines === undefined ? (
          <input {...shared} ref={ref} type={type} inputMode={inputMode} onChange={(event) => onChange(event.target.value)} />
        ) : (
          <textarea {...shared} rows={lines} onChange={(event) => onChange(event.target.value)} />
        )}
        {unit === undefined ? null : <span className="field-unit">{unit}</span>}
      </span>
    </FieldFrame>
  );
}
