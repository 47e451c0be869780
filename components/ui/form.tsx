import type { ReactNode } from 'react';

/** A real form: Enter sends it, and password managers see it. */
export function Form({ children, onSubmit, name }: { children: ReactNode; onSubmit: () => void; name?: string }) {
  return (
    <form
      noValidate
      aria-label={name}
      className="form"
      onSubmit={(event) => {
        event.preventDefault();
        onSubmit();
      }}
    >
      {children}
    </form>
  );
}
