/** What this page knows about its way to the server. */
export interface Connection {
  /** False after a request that got no answer, until one does. */
  reachable: boolean;
  /** Whether the live stream is open; null before it was tried. */
  live: boolean | null;
  /** When the server was last heard, by answer or frame; null before the first. */
  heardAtMs: number | null;
}

type Listener = () => void;

/** A small store, so that requests, the live stream and the screens agree on whether data is fresh. */
export function createConnectionStore(nowMs: () => number) {
  let state: Connection = { reachable: true, live: null, heardAtMs: null };
  const listeners = new Set<Listener>();

  function set(next: Partial<Connection>): void {
    const changed = { ...state, ...next };
    const heardSoon = changed.heardAtMs !== null && state.heardAtMs !== null && changed.heardAtMs - state.heardAtMs < 1000;
    if (changed.reachable === state.reachable && changed.live === state.live && heardSoon) return;
    state = changed;
    for (const listener of listeners) listener();
  }

  return {
    get: () => state,
    subscribe(listener: Listener) {
      listeners.add(listener);
      return () => {
        listeners.delete(listener);
      };
    },
    heard: () => set({ reachable: true, heardAtMs: nowMs() }),
    unheard: () => set({ reachable: false }),
    setLive: (live: boolean | null) => set(live === true ? { live, reachable: true, heardAtMs: nowMs() } : { live }),
  };
}

export const connection = createConnectionStore(() => Date.now());
