import type { ReactNode } from 'react';

/** The filled block, for an urgent state and nothing else. Text inside: `<Text inherit>`. */
export function UrgentBlock({ children }: { children: ReactNode }) {
  return <div className="urgent-block">{children}</div>;
}
