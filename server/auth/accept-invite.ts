import { newPasswordSchema, type User } from '#shared/contract/auth.ts';
import { recordAudit } from '../audit/record-audit.ts';
import type { Core } from '../core.ts';
import { query } from '../db/open.ts';
import type { Transaction } from '../db/writer.ts';
import { BadInputError, NotFoundError, NotSignedInError } from '../errors.ts';
import type { Caller } from './caller.ts';
import { hashOfToken } from './hash-of-token.ts';
import type { PasswordHasher } from './password-hasher.ts';
import type { OpenedSession } from './sessions.ts';
import { addUser, userByEmail } from './users.ts';

export interface InviteParts {
  core: Core;
  hasher: PasswordHasher;
  /** Counts the attempt before anything is hashed. */
  limited<Result>(account: string, caller: Caller, attempt: () => Promise<Result>): Promise<Result>;
  openSession(tx: Transaction, user: User, caller: Caller): OpenedSession;
}

/** Takes the role of a one-time link; somebody without an account makes one, whoever has one gives its password. */
export async function acceptInvite(
  { core, hasher, limited, openSession }: InviteParts,
  form: { token: string; name: string; password: string },
  caller: Caller,
): Promise<OpenedSession> {
  const { clock, reader, writer } = core;
  const invited = await reader.selectFrom('invite').selectAll().where('tokenHash', '=', hashOfToken(form.token)).executeTakeFirst();
  const gone = 'This invitation is no longer good: ask for a new one';
  const isGood = (invite: { acceptedAtMs: number | null; expiresAtMs: number }) =>
    invite.acceptedAtMs === null && invite.expiresAtMs > clock.nowMs();
  return limited(invited?.email ?? 'invite', caller, async () => {
    if (invited === undefined || !isGood(invited)) throw new NotFoundError(gone);
    const known = await reader.selectFrom('user').selectAll().where('email', '=', invited.email).executeTakeFirst();
    let passwordHash: string;
    if (known === undefined) {
      const checked = newPasswordSchema.safeParse(form.password);
      if (!checked.success) {
        throw new BadInputError(checked.error.issues.map((issue) => ({ path: 'password', message: issue.message })));
      }
      passwordHash = await hasher.hash(form.password);
    } else {
      if (!(await hasher.verify(known.passwordHash, form.password))) {
        throw new NotSignedInError('You have an account with this e-mail address already: give its password');
      }
      passwordHash = known.passwordHash;
    }
    return writer.commit((tx) => {
      const nowMs = clock.nowMs();
      const invite = tx.first(query.selectFrom('invite').selectAll().where('id', '=', invited.id));
      if (invite === undefined || !isGood(invite)) throw new NotFoundError(gone);
      // An account made meanwhile was not asked for its password.
      const account = userByEmail(tx, invite.email);
      if (account?.passwordHash !== known?.passwordHash) throw new NotSignedInError('The account has changed meanwhile: try again');
      const user = account ?? addUser(tx, { email: invite.email, name: form.name, passwordHash, nowMs });
      const member = { siteId: invite.siteId, userId: user.id, role: invite.role, createdAtMs: nowMs };
      // Somebody who is a member already keeps the role that an owner gave meanwhile.
      tx.run(
        query
          .insertInto('membership')
          .values(member)
          .onConflict((conflict) => conflict.doNothing()),
      );
      tx.run(query.updateTable('invite').set({ acceptedAtMs: nowMs }).where('id', '=', invite.id));
      recordAudit(tx, {
        atMs: nowMs,
        siteId: invite.siteId,
        actor: { kind: 'user', id: user.id },
        action: 'accept',
        entity: 'invite',
        entityId: invite.id,
        after: { role: invite.role },
      });
      return openSession(tx, user, caller);
    });
  });
}
