import { randomBytes } from 'node:crypto';
import { hash, verify } from '@node-rs/argon2';
import { TooManyError } from '../errors.ts';

export interface PasswordHasher {
  hash(password: string): Promise<string>;
  /** True when the password is that of the hash. Without a hash it takes the same time and is false. */
  verify(passwordHash: string | undefined, password: string): Promise<boolean>;
}

/** Argon2id (2): 19 MiB, two passes, one lane: what OWASP's password storage advice names as the least. */
const options = { algorithm: 2, memoryCost: 19_456, timeCost: 2, parallelism: 1 };

const AT_A_TIME = 2;
const MOST_WAITING = 16;

/** Hashes at most two at a time, so that sign-ins cannot starve the rest; a longer queue is refused. */
export function createPasswordHasher(mostWaiting = MOST_WAITING): PasswordHasher {
  const waiting: (() => void)[] = [];
  let running = 0;
  let nobody: Promise<string> | undefined;

  async function inTurn<Result>(work: () => Promise<Result>): Promise<Result> {
    if (running >= AT_A_TIME) {
      if (waiting.length >= mostWaiting) throw new TooManyError('Too many people sign in at once: try again in a few seconds', 5);
      await new Promise<void>((resolve) => waiting.push(resolve));
    } else {
      running += 1;
    }
    try {
      return await work();
    } finally {
      const next = waiting.shift();
      if (next === undefined) running -= 1;
      else next();
    }
  }

  return {
    hash: (password) => inTurn(() => hash(password, options)),
    async verify(passwordHash, password) {
      if (passwordHash !== undefined) return inTurn(() => verify(passwordHash, password));
      nobody ??= hash(randomBytes(16), options);
      const ofNobody = await nobody;
      await inTurn(() => verify(ofNobody, password));
      return false;
    },
  };
}
