import { createHash, randomBytes, timingSafeEqual } from 'node:crypto';

/** 192 random bits: nothing to guess, so a fast hash serves, and a thousand pumps can sign in at once. */
const SECRET_BYTES = 24;

export function newDeviceSecret(): string {
  return randomBytes(SECRET_BYTES).toString('base64url');
}

export function hashDeviceSecret(secret: string): string {
  return createHash('sha256').update(secret).digest('hex');
}

/** In a time that does not tell how much of it fits. */
export function isDeviceSecret(secret: string, secretHash: string): boolean {
  const kept = Buffer.from(secretHash, 'hex');
  const given = createHash('sha256').update(secret).digest();
  return kept.length === given.length && timingSafeEqual(kept, given);
}
