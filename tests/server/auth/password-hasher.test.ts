import { expect, it } from 'vitest';
import { createPasswordHasher } from '../../../server/auth/password-hasher.ts';
import { TooManyError } from '../../../server/errors.ts';

it('keeps argon2id hashes with 19 MiB, two passes and one lane', async () => {
  expect(await createPasswordHasher().hash('a password')).toMatch(/^\$argon2id\$v=19\$m=19456,t=2,p=1\$/);
});

it('knows the password again, and no other', async () => {
  const hasher = createPasswordHasher();
  const hash = await hasher.hash('a password');
  expect(await hasher.verify(hash, 'a password')).toBe(true);
  expect(await hasher.verify(hash, 'A password')).toBe(false);
});

it('is false for an account that does not exist', async () => {
  expect(await createPasswordHasher().verify(undefined, '')).toBe(false);
});

it('refuses what would wait in too long a queue, and goes on with the rest', async () => {
  const hasher = createPasswordHasher(3);
  const outcomes = await Promise.allSettled(Array.from({ length: 8 }, (_, n) => hasher.hash(`password ${n}`)));
  const refused = outcomes.flatMap((outcome) => (outcome.status === 'rejected' ? [outcome.reason as unknown] : []));
  expect(refused).toHaveLength(3);
  expect(refused.every((reason) => reason instanceof TooManyError)).toBe(true);
  expect(await hasher.hash('one more')).toMatch(/^\$argon2id/);
});
