import { useSyncExternalStore } from 'react';
import { session, type SessionState } from '../lib/session.ts';

/** Who is signed in, as far as is known. */
export function useSession(): SessionState {
  return useSyncExternalStore(session.subscribe, session.get, session.get);
}
