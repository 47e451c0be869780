import type { ReactNode } from 'react';

export interface FieldFrameProps {
  id: string;
  label: string;
  hint?: string;
  error?: string | null;
  /** What was understood of what was typed. */
  echo?: string | null;
  children: ReactNode;
}

/** Ids of what stands around a field, for `aria-describedby`. */
export function describedBy(id: string, { hint, error, echo }: Pick<FieldFrameProps, 'hint' | 'error' | 'echo'>): string | undefined {
  const ids = [hint ? `${id}-hint` : null, error ? `${id}-error` : null, echo ? `${id}-echo` : null].filter((part) => part !== null);
  return ids.length === 0 ? undefined : ids.join(' ');
}

/** Label above, then the field, then what was understood or what does not fit, in words. */
export function FieldFrame({ id, label, hint, error, echo, children }: FieldFrameProps) {
  return (
    <div className="field">
      <label className="field-label" htmlFor={id}>
        {label}
      </label>
      {hint ? (
        <span className="field-hint" id={`${id}-hint`}>
          {hint}
        </span>
      ) : null}
      {children}
      {error ? (
        <span className="field-error" id={`${id}-error`}>
          {error}
        </span>
      ) : null}
      {!error && echo ? (
        <span className="field-echo" id={`${id}-echo`}>
          {echo}
        </span>
      ) : null}
    </div>
  );
}
