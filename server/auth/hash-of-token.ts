import { createHash } from 'node:crypto';

/** What is kept of a random one-time token: enough to know it again, nothing to use it with. */
export function hashOfToken(token: string): string {
  return createHash('sha256').update(token).digest('hex');
}
