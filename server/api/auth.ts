import type { Request } from 'express';
import type { Caller } from '../auth/caller.ts';
import type { Auth } from '../auth/create-auth.ts';
import type { Row } from '../db/schema.ts';
import { NotSignedInError } from '../errors.ts';
import { bearerOf } from './bearer.ts';
import { pageOfWhole } from './page.ts';
import type { RefreshCookie } from './refresh-cookie.ts';
import { handlers } from './route.ts';
import { requireSameOrigin } from './same-origin.ts';

function callerOf(request: Request): Caller {
  const userAgent = (request.headers['user-agent'] ?? '').slice(0, 200);
  return { address: request.ip ?? 'unknown', userAgent };
}

const asSession = (session: Row<'session'>, currentId: string) => ({
  id: session.id,
  createdAt: new Date(session.createdAtMs).toISOString(),
  lastUsedAt: new Date(session.rotatedAtMs).toISOString(),
  userAgent: session.userAgent,
  current: session.id === currentId,
});

/** For a client that keeps no cookies: the session that its access token names. */
async function endByBearer(auth: Auth, accessToken: string): Promise<void> {
  const person = await auth.sessions.authenticate(accessToken);
  await auth.sessions.end(person.userId, person.sessionId);
}

export function authHandlers(auth: Auth, cookie: RefreshCookie, publicUrl: string | undefined) {
  return handlers({
    async signIn({ body, request, response }) {
      requireSameOrigin(request, publicUrl);
      const session = await auth.signIn(body, callerOf(request));
      cookie.set(response, session);
      return session.grant;
    },
    async refresh({ request, response }) {
      requireSameOrigin(request, publicUrl);
      const token = cookie.read(request);
      if (token === undefined) throw new NotSignedInError('Sign in');
      try {
        const session = await auth.sessions.refresh(token);
        cookie.set(response, session);
        return session.grant;
      } catch (error) {
        if (error instanceof NotSignedInError) cookie.clear(response);
        throw error;
      }
    },
    async signOut({ request, response }) {
      requireSameOrigin(request, publicUrl);
      const token = cookie.read(request);
      if (token !== undefined) await auth.sessions.endByToken(token);
      else if (request.headers.authorization !== undefined) await endByBearer(auth, bearerOf(request));
      cookie.clear(response);
      return {};
    },
    welcomeState: () => auth.welcomeState(),
    async welcome({ body, request, response }) {
      requireSameOrigin(request, publicUrl);
      const session = await auth.welcome(body, callerOf(request));
      cookie.set(response, session);
      return session.grant;
    },
    async acceptInvite({ body, request, response }) {
      requireSameOrigin(request, publicUrl);
      const session = await auth.acceptInvite(body, callerOf(request));
      cookie.set(response, session);
      return session.grant;
    },
    me: ({ person }) => auth.me(person.userId),
    updateMe: ({ person, body }) => auth.rename(person.userId, body.name),
    async changePassword({ person, body, request }) {
      await auth.changePassword(person, body, callerOf(request));
      return {};
    },
    async sessions({ person, query }) {
      const open = await auth.sessions.list(person.userId);
      return pageOfWhole(
        open.map((session) => asSession(session, person.sessionId)),
        query,
      );
    },
    async endSession({ person, params }) {
      await auth.sessions.end(person.userId, params.sessionId);
      return {};
    },
  });
}
