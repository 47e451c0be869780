import { randomBytes } from 'node:crypto';
import { readFileSync, writeFileSync } from 'node:fs';
import path from 'node:path';
import type { Config } from '../config.ts';

/** `JWT_SECRET`, or one that is made once and kept in `DATA_DIR`, readable by its owner only. */
export function readJwtSecret(config: Config): string {
  if (config.JWT_SECRET !== undefined) return config.JWT_SECRET;
  const file = path.join(config.DATA_DIR, 'jwt-secret');
  try {
    // `wx`: of two starts at the same time only one makes the secret.
    writeFileSync(file, `${randomBytes(32).toString('base64url')}\n`, { mode: 0o600, flag: 'wx' });
  } catch (error) {
    if (!(error instanceof Error && 'code' in error && error.code === 'EEXIST')) throw error;
  }
  const secret = readFileSync(file, 'utf8').trim();
  if (secret.length < 32) throw new Error(`${file} holds no secret of at least 32 characters: delete it to have a new one made`);
  return secret;
}
