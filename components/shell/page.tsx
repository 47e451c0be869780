import type { ReactNode } from 'react';
import { Screen } from '../ui/screen.tsx';
import { AppHeader } from './app-header.tsx';
import { StaleBar } from './stale-bar.tsx';

/** A page that belongs to no system: Rounds, Account, Site. */
export function Page({ children, wide }: { children: ReactNode; wide?: boolean }) {
  return (
    <div className="shell">
      <AppHeader />
      <StaleBar />
      <main id="content" className="shell-main" tabIndex={-1}>
        <Screen wide={wide}>{children}</Screen>
      </main>
    </div>
  );
}
