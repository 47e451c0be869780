import { useEffect, useState, useSyncExternalStore } from 'react';
import { connection } from '../lib/connection.ts';

export interface Freshness {
  fresh: boolean;
  /** Since when this page cannot tell; null while it can. */
  staleSinceMs: number | null;
}

/** A stream that comes back within this time was no interruption worth a word. */
const graceMs = 8000;

function subscribeToOnline(listener: () => void): () => void {
  window.addEventListener('online', listener);
  window.addEventListener('offline', listener);
  return () => {
    window.removeEventListener('online', listener);
    window.removeEventListener('offline', listener);
  };
}

/** Whether the browser has a network at all. */
export function useOnline(): boolean {
  return useSyncExternalStore(
    subscribeToOnline,
    () => navigator.onLine,
    () => true,
  );
}

/** Whether what is shown is what the server knows now. */
export function useFreshness(): Freshness {
  const state = useSyncExternalStore(connection.subscribe, connection.get, connection.get);
  const online = useOnline();
  const isInterrupted = !online || !state.reachable || state.live === false;
  const [overdue, setOverdue] = useState(false);

  useEffect(() => {
    if (!isInterrupted) return undefined;
    const timer = setTimeout(() => setOverdue(true), graceMs);
    return () => {
      clearTimeout(timer);
      setOverdue(false);
    };
  }, [isInterrupted]);

  const stale = isInterrupted && (overdue || !online || !state.reachable) && state.heardAtMs !== null;
  return { fresh: !stale, staleSinceMs: stale ? state.heardAtMs : null };
}
