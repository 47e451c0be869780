import type { ReactNode } from 'react';

/**
 * Says what changes in it to a screen reader, once it stands on the page. `assertive` interrupts: for alarms and the outcome
 * of Stop only.
 */
export function LiveRegion({ children, assertive, hidden }: { children: ReactNode; assertive?: boolean; hidden?: boolean }) {
  return (
    <div
      role={assertive === true ? 'alert' : 'status'}
      aria-live={assertive === true ? 'assertive' : 'polite'}
      className={hidden === true ? 'visually-hidden' : undefined}
    >
      {children}
    </div>
  );
}
