import { createHmac, timingSafeEqual } from 'node:crypto';

/** Which rotation of which session a refresh token is. */
export interface RefreshToken {
  sessionId: string;
  generation: number;
}

export interface RefreshTokens {
  sign(token: RefreshToken): string;
  /** Null for anything that was not made here. */
  read(text: string): RefreshToken | null;
}

/**
 * Refresh tokens carry their generation under a MAC. Any older generation is thereby provably one of ours that came
 * back, however often it was rotated since; and two tabs that refresh at once get the same successor.
 */
export function createRefreshTokens(secret: string): RefreshTokens {
  const key = createHmac('sha256', secret).update('steadfall refresh token').digest();
  const macOf = (text: string) => createHmac('sha256', key).update(text).digest();

  return {
    sign({ sessionId, generation }) {
      const named = `${sessionId}.${generation}`;
      return `${named}.${macOf(named).toString('base64url')}`;
    },
    read(text) {
      const [sessionId, generation, mac, ...more] = text.split('.');
      if (sessionId === undefined || generation === undefined || mac === undefined || more.length > 0) return null;
      const given = Buffer.from(mac, 'base64url');
      const made = macOf(`${sessionId}.${generation}`);
      if (given.length !== made.length || !timingSafeEqual(given, made)) return null;
      return { sessionId, generation: Number(generation) };
    },
  };
}
