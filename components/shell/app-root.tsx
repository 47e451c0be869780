import { QueryClientProvider } from '@tanstack/react-query';
import { Slot, usePathname, useRouter, useSegments } from 'expo-router';
import { useEffect } from 'react';
import { queryClient } from '../../hooks/query-client.ts';
import { useOutboxSender } from '../../hooks/use-outbox.ts';
import { useSession } from '../../hooks/use-session.ts';
import { session } from '../../lib/session.ts';
import { followOtherTabs } from '../../lib/session-tabs.ts';
import { LiveSystems } from './live-systems.tsx';
import { Starting } from './starting.tsx';

/** Pages that need nobody signed in. */
const openPages = ['sign-in', 'welcome', 'join'];

/** Everything around the routes: the cache, who is signed in, the live stream, the outbox. */
export function AppRoot() {
  return (
    <QueryClientProvider client={queryClient}>
      <Gate />
    </QueryClientProvider>
  );
}

function Gate() {
  const state = useSession();
  const segments: string[] = useSegments();
  const path = usePathname();
  const router = useRouter();
  const isOpenPage = openPages.includes(segments[0] ?? '');
  const mustSignIn = state.status === 'signed-out' && !isOpenPage;
  useOutboxSender();

  useEffect(() => {
    // A failure is in the session's own state, and shown from there.
    session.refresh().catch(() => undefined);
    return followOtherTabs(() => queryClient.clear());
  }, []);

  useEffect(() => {
    if (mustSignIn) router.replace(path === '/' ? '/sign-in' : { pathname: '/sign-in', params: { to: path } });
  }, [mustSignIn, path, router]);

  const isWaiting = !isOpenPage && state.status !== 'signed-in';
  return (
    <div className="app">
      <a className="skip-link" href="#content">
        Skip to content
      </a>
      {state.status === 'signed-in' ? <LiveSystems /> : null}
      {/* The routes stay mounted, or the router would lose the address that was asked for. */}
      {isWaiting ? <Starting state={state} /> : <Slot />}
    </div>
  );
}
