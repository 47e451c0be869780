import { mkdtempSync, rmSync, statSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { afterEach, beforeEach, expect, it } from 'vitest';
import { readJwtSecret } from '../../../server/auth/jwt-secret.ts';
import { readConfig } from '../../../server/config.ts';

let folder: string;

beforeEach(() => {
  folder = mkdtempSync(path.join(tmpdir(), 'steadfall-secret-'));
});

afterEach(() => rmSync(folder, { recursive: true }));

it('is made once, and readable by its owner only', () => {
  const config = readConfig({ DATA_DIR: folder });
  const secret = readJwtSecret(config);
  expect(secret.length).toBeGreaterThanOrEqual(43);
  expect(readJwtSecret(config)).toBe(secret);
  expect(statSync(path.join(folder, 'jwt-secret')).mode & 0o777).toBe(0o600);
});

it('is that of the configuration when one is set', () => {
  const secret = 'x'.repeat(40);
  expect(readJwtSecret(readConfig({ DATA_DIR: folder, JWT_SECRET: secret }))).toBe(secret);
});

it('stops the start when the file was emptied', () => {
  writeFileSync(path.join(folder, 'jwt-secret'), '');
  expect(() => readJwtSecret(readConfig({ DATA_DIR: folder }))).toThrow(/delete it/);
});
