import type { ReactNode, Ref } from 'react';

export interface ButtonProps {
  /** What it does, in words; also its accessible name unless `name` is given. */
  children: ReactNode;
  onPress?: () => void;
  kind?: 'primary' | 'secondary' | 'quiet';
  /** Sends the form that it stands in. */
  submit?: boolean;
  disabled?: boolean;
  /** Work is going on: says so, and takes no second press. */
  busy?: boolean;
  wide?: boolean;
  /** Accessible name, where the visible text alone does not say enough. Starts with the visible text. */
  name?: string;
  describedBy?: string;
  expanded?: boolean;
  controls?: string;
  ref?: Ref<HTMLButtonElement>;
}

/** A real button. A disabled one stays in the tab order, so that a keyboard finds it and a reader hears why. */
export function Button({
  children,
  onPress,
  kind = 'secondary',
  submit,
  disabled,
  busy,
  wide,
  name,
  describedBy,
  expanded,
  controls,
  ref,
}: ButtonProps) {
  const idle = disabled !== true && busy !== true;
  return (
    <button
      ref={ref}
      type={submit === true ? 'submit' : 'button'}
      className={`button button-${kind}${wide === true ? ' button-wide' : ''}`}
      aria-disabled={disabled === true ? true : undefined}
      aria-busy={busy === true ? true : undefined}
      aria-label={name}
      aria-describedby={describedBy}
      aria-expanded={expanded}
      aria-controls={controls}
      onClick={(event) => {
        if (!idle) event.preventDefault();
        else onPress?.();
      }}
    >
      {busy === true ? <>{children}...</> : children}
    </button>
  );
}
