import type { SessionGrant, User } from '#shared/contract/auth.ts';
import { ApiError, type ApiProblem } from './api-problem.ts';
import { request } from './request.ts';
import { withLock } from './with-lock.ts';

export type SessionState =
  /** Asking the server whether the cookie still opens a session. */
  | { status: 'starting' }
  | { status: 'signed-in'; user: User }
  | { status: 'signed-out' }
  /** No answer yet to the first question; the page keeps trying. */
  | { status: 'unreachable'; problem: ApiProblem };

/** A token is renewed when it has less than this left, so that no request starts with one that dies on the way. */
const renewBeforeEndMs = 30_000;

export interface SessionParts {
  askRefresh: () => Promise<SessionGrant>;
  nowMs: () => number;
}

/**
 * Who is signed in. The access token lives in memory only; the refresh token is a cookie that scripts cannot read.
 * Refreshing is done once at a time, over all tabs, since each use of the cookie replaces it.
 */
export function createSession({ askRefresh, nowMs }: SessionParts) {
  let state: SessionState = { status: 'starting' };
  let token: { text: string; endsAtMs: number } | null = null;
  let refreshing: Promise<string | null> | null = null;
  const listeners = new Set<() => void>();

  function set(next: SessionState): void {
    state = next;
    for (const listener of listeners) listener();
  }

  function accept(grant: SessionGrant): void {
    token = { text: grant.accessToken, endsAtMs: nowMs() + grant.expiresIn * 1000 };
    const same = state.status === 'signed-in' && state.user.id === grant.user.id && state.user.name === grant.user.name;
    if (!same) set({ status: 'signed-in', user: grant.user });
  }

  function forget(): void {
    token = null;
    if (state.status !== 'signed-out') set({ status: 'signed-out' });
  }

  async function refreshOnce(): Promise<string | null> {
    try {
      const grant = await withLock('refresh', askRefresh);
      accept(grant);
      return grant.accessToken;
    } catch (error) {
      if (!(error instanceof ApiError)) throw error;
      if (error.problem.kind === 'signed-out' || error.problem.kind === 'forbidden') {
        forget();
        return null;
      }
      // Without an answer nobody is signed out: what is on the screen stays, and the next request tries again.
      if (state.status !== 'signed-in') set({ status: 'unreachable', problem: error.problem });
      throw error;
    }
  }

  /** Trades the cookie for a new token; callers at the same time share one request. Null when signed out. */
  function refresh(): Promise<string | null> {
    refreshing ??= refreshOnce().finally(() => {
      refreshing = null;
    });
    return refreshing;
  }

  return {
    get: () => state,
    subscribe(listener: () => void) {
      listeners.add(listener);
      return () => {
        listeners.delete(listener);
      };
    },
    accept,
    forget,
    refresh,
    /** A token that is good for a while, refreshed if need be; null when signed out. */
    async accessToken(): Promise<string | null> {
      if (token !== null && token.endsAtMs - nowMs() > renewBeforeEndMs) return token.text;
      // The cookie is gone with the session: what is still on its way asks for nothing more.
      if (state.status === 'signed-out') return null;
      return refresh();
    },
  };
}

export const session = createSession({ askRefresh: () => request('refresh', {}, null), nowMs: () => Date.now() });
