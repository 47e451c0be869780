import { useEffect, useSyncExternalStore } from 'react';
import { session } from '../lib/session.ts';
import type { OutboxEntry } from '../lib/outbox.ts';
import { outbox } from './app-outbox.ts';

/** What waits for the network, or was refused after waiting; of one system, or of all. */
export function useOutbox(systemId?: string): OutboxEntry[] {
  const entries = useSyncExternalStore(outbox.subscribe, outbox.get, outbox.get);
  return systemId === undefined ? entries : entries.filter((entry) => entry.systemId === systemId);
}

/** Sends what waits whenever the network or the session comes back. Mounted once, in the root layout. */
export function useOutboxSender(): void {
  useEffect(() => {
    const flush = () => {
      if (outbox.get().some((entry) => entry.refused === null)) void outbox.flush();
    };
    const onStorage = (event: StorageEvent) => {
      if (event.key === 'steadfall.outbox') outbox.reread();
    };
    flush();
    window.addEventListener('online', flush);
    window.addEventListener('storage', onStorage);
    const unsubscribe = session.subscribe(() => {
      if (session.get().status === 'signed-in') flush();
    });
    return () => {
      window.removeEventListener('online', flush);
      window.removeEventListener('storage', onStorage);
      unsubscribe();
    };
  }, []);
}

/** Sending by hand, and giving an entry up. */
export function useOutboxActions() {
  return { sendNow: () => void outbox.flush(), discard: outbox.discard };
}
