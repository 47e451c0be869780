import { useId, type ReactNode } from 'react';
import { Heading } from './heading.tsx';

/** A part of a screen with its heading; `aside` stands at the end of the heading's line. */
export function Section({ title, aside, children }: { title: string; aside?: ReactNode; children: ReactNode }) {
  const id = useId();
  return (
    <section className="section" aria-labelledby={id}>
      <div className="section-head">
        <Heading level={2} id={id}>
          {title}
        </Heading>
        {aside}
      </div>
      {children}
    </section>
  );
}
