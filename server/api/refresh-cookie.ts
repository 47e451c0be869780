import type { CookieOptions, Request, Response } from 'express';
import type { OpenedSession } from '../auth/sessions.ts';

const name = 'steadfall_refresh';

export interface RefreshCookie {
  read(request: Request): string | undefined;
  set(response: Response, session: OpenedSession): void;
  clear(response: Response): void;
}

/** The refresh token travels only to `/api/auth`, never to scripts, never with a request that another site started. */
export function createRefreshCookie(isSecure: boolean): RefreshCookie {
  const options: CookieOptions = { httpOnly: true, sameSite: 'strict', path: '/api/auth', secure: isSecure };
  return {
    read(request) {
      const cookies: Record<string, unknown> = request.cookies;
      const value = cookies[name];
      return typeof value === 'string' ? value : undefined;
    },
    set: (response, session) => void response.cookie(name, session.refreshToken, { ...options, expires: new Date(session.expiresAtMs) }),
    clear: (response) => void response.clearCookie(name, options),
  };
}
