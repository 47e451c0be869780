import type { ReactNode } from 'react';
import { Wordmark } from '../shell/wordmark.tsx';
import { Heading } from '../ui/heading.tsx';
import { Text } from '../ui/text.tsx';

/** A page before anybody is signed in. */
export function AuthPage({ title, sentence, children }: { title: string; sentence?: string; children: ReactNode }) {
  return (
    <main id="content" className="page-narrow" tabIndex={-1}>
      <div style={{ display: 'flex', flexDirection: 'column', gap: 24 }}>
        <div>
          <Wordmark />
          <Text soft>Dose watch for reef systems</Text>
        </div>
        <div style={{ display: 'flex', flexDirection: 'column', gap: 4 }}>
          <Heading level={1}>{title}</Heading>
          {sentence === undefined ? null : <Text>{sentence}</Text>}
        </div>
        {children}
      </div>
    </main>
  );
}
