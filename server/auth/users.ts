import { uuidv7 } from 'uuidv7';
import type { User } from '#shared/contract/auth.ts';
import { query } from '../db/open.ts';
import type { Row } from '../db/schema.ts';
import type { Transaction } from '../db/writer.ts';

/** Adds a person within the caller's unit. E-mail addresses are unique and kept in lower case. */
export function addUser(tx: Transaction, person: { email: string; name: string; passwordHash: string; nowMs: number }): User {
  const user = { id: uuidv7(), email: person.email.toLowerCase(), name: person.name };
  tx.run(query.insertInto('user').values({ ...user, passwordHash: person.passwordHash, createdAtMs: person.nowMs }));
  return user;
}

export function userByEmail(tx: Transaction, email: string): Row<'user'> | undefined {
  return tx.first(query.selectFrom('user').selectAll().where('email', '=', email.toLowerCase()));
}

export function hasUsers(tx: Transaction): boolean {
  return tx.first(query.selectFrom('user').select('id').limit(1)) !== undefined;
}
