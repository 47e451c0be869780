/** Something was taken from somebody, after its commit: what is open on it must close at once. */
export type AccessChange = { kind: 'session-ended'; sessionId: string } | { kind: 'role-changed'; userId: string; siteId: string };

export interface AccessChanges {
  announce(change: AccessChange): void;
  /** @returns the unsubscriber. */
  subscribe(listener: (change: AccessChange) => void): () => void;
}

export function createAccessChanges(): AccessChanges {
  const listeners = new Set<(change: AccessChange) => void>();
  return {
    announce: (change) => listeners.forEach((listener) => listener(change)),
    subscribe(listener) {
      listeners.add(listener);
      return () => listeners.delete(listener);
    },
  };
}
