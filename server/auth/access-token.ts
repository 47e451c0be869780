import jwt from 'jsonwebtoken';
import { z } from 'zod';
import type { Clock } from '../clock.ts';
import { NotSignedInError } from '../errors.ts';
import type { Person } from '../access/person.ts';

export const ACCESS_TOKEN_SECONDS = 600;

const issuer = 'steadfall';
const audience = 'steadfall-api';
const algorithm = 'HS256';
/** RFC 9068 2.1: the type keeps an access token from being taken for another kind of token. */
const type = 'at+jwt';

const payloadSchema = z.object({ sub: z.string(), sid: z.string() });

export interface AccessTokens {
  sign(person: Person): string;
  /** @throws {NotSignedInError} for anything but a token of ours that still holds. */
  verify(token: string): Person;
}

/** Short-lived JWTs that name a session; whether the session still stands is looked up at each request. */
export function createAccessTokens(secret: string, clock: Clock): AccessTokens {
  return {
    sign(person) {
      const nowSeconds = Math.floor(clock.nowMs() / 1000);
      const payload = { sid: person.sessionId, sub: person.userId, iat: nowSeconds, exp: nowSeconds + ACCESS_TOKEN_SECONDS };
      return jwt.sign(payload, secret, { algorithm, issuer, audience, header: { alg: algorithm, typ: type } });
    },
    verify(token) {
      try {
        const clockTimestamp = Math.floor(clock.nowMs() / 1000);
        const verified = jwt.verify(token, secret, { algorithms: [algorithm], issuer, audience, clockTimestamp, complete: true });
        if (verified.header.typ !== type) throw new NotSignedInError('The access token is of another kind: sign in again');
        const payload = payloadSchema.parse(verified.payload);
        return { userId: payload.sub, sessionId: payload.sid };
      } catch (error) {
        if (error instanceof NotSignedInError) throw error;
        throw new NotSignedInError('The access token is not valid or has expired: refresh it, or sign in again');
      }
    },
  };
}
