import { uuidv7 } from 'uuidv7';
import type { SessionGrant, User } from '#shared/contract/auth.ts';
import type { AccessChanges } from '../access/access-changes.ts';
import type { Person } from '../access/person.ts';
import type { Core } from '../core.ts';
import { query } from '../db/open.ts';
import type { Row } from '../db/schema.ts';
import type { Transaction } from '../db/writer.ts';
import { NotFoundError, NotSignedInError } from '../errors.ts';
import { ACCESS_TOKEN_SECONDS, createAccessTokens } from './access-token.ts';
import { createRefreshTokens, type RefreshToken } from './refresh-token.ts';

const DAY_MS = 86_400_000;
/** A session ends when it was not used for this long, and at the latest `LONGEST_MS` after the sign-in. */
const IDLE_MS = 30 * DAY_MS;
const LONGEST_MS = 180 * DAY_MS;
/** Two tabs that refresh at the same time present the same token; later the same token is a stolen one. */
const GRACE_MS = 10_000;

/** What a person who signed in gets: the grant for the app, and the refresh token for the cookie. */
export interface OpenedSession {
  grant: SessionGrant;
  refreshToken: string;
  expiresAtMs: number;
}

export interface Sessions {
  /** Writes down a new session within the caller's unit of work. */
  open(tx: Transaction, user: User, userAgent: string): OpenedSession;
  /** @throws {NotSignedInError} unless the token names a session that still stands. */
  authenticate(accessToken: string): Promise<Person>;
  /** @throws {NotSignedInError} for a token that is not good, or no longer; one used again after the grace ends its session. */
  refresh(refreshToken: string): Promise<OpenedSession>;
  endByToken(refreshToken: string): Promise<void>;
  /** @throws {NotFoundError} unless it is an open session of this person. */
  end(userId: string, sessionId: string): Promise<void>;
  /** Ends all sessions of a user but one within the caller's unit; `announce` their ends once it is committed. */
  endOthers(tx: Transaction, person: Person): string[];
  announceEnded(sessionIds: string[]): void;
  list(userId: string): Promise<Row<'session'>[]>;
}

const gone = 'The session has ended: sign in again';

export function createSessions(core: Core, secret: string, changes: AccessChanges): Sessions {
  const { clock, writer, reader } = core;
  const accessTokens = createAccessTokens(secret, clock);
  const refreshTokens = createRefreshTokens(secret);

  function opened(user: User, session: RefreshToken & { expiresAtMs: number }): OpenedSession {
    const accessToken = accessTokens.sign({ userId: user.id, sessionId: session.sessionId });
    return {
      grant: { accessToken, expiresIn: ACCESS_TOKEN_SECONDS, user: { id: user.id, email: user.email, name: user.name } },
      refreshToken: refreshTokens.sign(session),
      expiresAtMs: session.expiresAtMs,
    };
  }

  function standing(tx: Transaction, sessionId: string): Row<'session'> | undefined {
    return tx.first(
      query
        .selectFrom('session')
        .selectAll()
        .where('id', '=', sessionId)
        .where('revokedAtMs', 'is', null)
        .where('expiresAtMs', '>', clock.nowMs()),
    );
  }

  function revoke(tx: Transaction, sessionId: string): void {
    tx.run(query.updateTable('session').set({ revokedAtMs: clock.nowMs() }).where('id', '=', sessionId).where('revokedAtMs', 'is', null));
  }

  function announceEnded(sessionIds: string[]): void {
    for (const sessionId of sessionIds) changes.announce({ kind: 'session-ended', sessionId });
  }

  return {
    open(tx, user, userAgent) {
      const nowMs = clock.nowMs();
      const session = { sessionId: uuidv7(), generation: 0, expiresAtMs: nowMs + IDLE_MS };
      tx.run(
        query.insertInto('session').values({
          id: session.sessionId,
          userId: user.id,
          generation: session.generation,
          rotatedAtMs: nowMs,
          createdAtMs: nowMs,
          expiresAtMs: session.expiresAtMs,
          revokedAtMs: null,
          userAgent,
        }),
      );
      return opened(user, session);
    },

    async authenticate(accessToken) {
      const person = accessTokens.verify(accessToken);
      const session = await reader
        .selectFrom('session')
        .select('id')
        .where('id', '=', person.sessionId)
        .where('userId', '=', person.userId)
        .where('revokedAtMs', 'is', null)
        .where('expiresAtMs', '>', clock.nowMs())
        .executeTakeFirst();
      if (session === undefined) throw new NotSignedInError(gone);
      return person;
    },

    async refresh(refreshToken) {
      const given = refreshTokens.read(refreshToken);
      if (given === null) throw new NotSignedInError(gone);
      const outcome = await writer.commit((tx): OpenedSession | 'gone' | 'reused' => {
        const session = standing(tx, given.sessionId);
        if (session === undefined || given.generation > session.generation) return 'gone';
        const nowMs = clock.nowMs();
        if (given.generation < session.generation) {
          const isSecondTab = given.generation === session.generation - 1 && nowMs - session.rotatedAtMs <= GRACE_MS;
          if (!isSecondTab) {
            revoke(tx, session.id);
            return 'reused';
          }
        }
        const user = tx.first(query.selectFrom('user').select(['id', 'email', 'name']).where('id', '=', session.userId));
        if (user === undefined) return 'gone';
        if (given.generation < session.generation) {
          return opened(user, { sessionId: session.id, generation: session.generation, expiresAtMs: session.expiresAtMs });
        }
        const generation = session.generation + 1;
        const expiresAtMs = Math.min(nowMs + IDLE_MS, session.createdAtMs + LONGEST_MS);
        tx.run(query.updateTable('session').set({ generation, rotatedAtMs: nowMs, expiresAtMs }).where('id', '=', session.id));
        return opened(user, { sessionId: session.id, generation, expiresAtMs });
      });
      if (outcome === 'reused') {
        core.log.warn({ sessionId: given.sessionId }, 'an old refresh token came back: the session is ended');
        announceEnded([given.sessionId]);
      }
      if (outcome === 'gone' || outcome === 'reused') throw new NotSignedInError(gone);
      return outcome;
    },

    async endByToken(refreshToken) {
      const given = refreshTokens.read(refreshToken);
      if (given === null) return;
      await writer.commit((tx) => revoke(tx, given.sessionId));
      announceEnded([given.sessionId]);
    },

    async end(userId, sessionId) {
      await writer.commit((tx) => {
        if (standing(tx, sessionId)?.userId !== userId) throw new NotFoundError('There is no such session');
        revoke(tx, sessionId);
      });
      announceEnded([sessionId]);
    },

    endOthers(tx, person) {
      const others = tx.all(
        query
          .selectFrom('session')
          .select('id')
          .where('userId', '=', person.userId)
          .where('id', '!=', person.sessionId)
          .where('revokedAtMs', 'is', null),
      );
      for (const other of others) revoke(tx, other.id);
      return others.map((other) => other.id);
    },

    announceEnded,

    list: (userId) =>
      reader
        .selectFrom('session')
        .selectAll()
        .where('userId', '=', userId)
        .where('revokedAtMs', 'is', null)
        .where('expiresAtMs', '>', clock.nowMs())
        .orderBy('id', 'desc')
        .execute(),
  };
}
