import type { ReactNode } from 'react';
import type { System } from '#shared/contract/systems.ts';
import { Heading } from '../ui/heading.tsx';

/** What every part of the rig gets. */
export interface RigPartProps {
  system: System;
  mayChange: boolean;
}

/** A part of the rig: its heading, its list, and the one way to add to it. */
export function RigPart({ title, action, children }: { title: string; action?: ReactNode; children: ReactNode }) {
  return (
    <section aria-label={title} style={{ display: 'flex', flexDirection: 'column', gap: 8 }}>
      <div className="item-head">
        <Heading level={2}>{title}</Heading>
        {action}
      </div>
      {children}
    </section>
  );
}
