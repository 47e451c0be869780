import { createHash, timingSafeEqual } from 'node:crypto';
import { uuidv7 } from 'uuidv7';
import type { Me, User } from '#shared/contract/auth.ts';
import type { AccessChanges } from '../access/access-changes.ts';
import type { Person } from '../access/person.ts';
import { recordAudit } from '../audit/record-audit.ts';
import type { Core } from '../core.ts';
import { query } from '../db/open.ts';
import type { Transaction } from '../db/writer.ts';
import { BadInputError, NotSignedInError, RuleError } from '../errors.ts';
import { addSite } from '../sites/add-site.ts';
import { acceptInvite } from './accept-invite.ts';
import { createAttemptLimit } from './attempt-limit.ts';
import type { Caller } from './caller.ts';
import { createPasswordHasher } from './password-hasher.ts';
import { createSessions, type OpenedSession, type Sessions } from './sessions.ts';
import { addUser, hasUsers, userByEmail } from './users.ts';
import { plainWelcomeCode } from './welcome-code.ts';

export interface AuthOptions {
  secret: string;
  /** Makes the first account; null where the welcome page is closed. */
  welcomeCode: string | null;
}

export interface Auth {
  sessions: Sessions;
  signIn(credentials: { email: string; password: string }, caller: Caller): Promise<OpenedSession>;
  welcomeState(): Promise<{ open: boolean; demo: boolean }>;
  welcome(form: WelcomeForm, caller: Caller): Promise<OpenedSession>;
  acceptInvite(form: { token: string; name: string; password: string }, caller: Caller): Promise<OpenedSession>;
  me(userId: string): Promise<Me>;
  rename(userId: string, name: string): Promise<Me>;
  changePassword(person: Person, form: { current: string; next: string }, caller: Caller): Promise<void>;
}

interface WelcomeForm {
  code: string;
  email: string;
  name: string;
  password: string;
  siteName: string;
  timeZone: string;
}

const QUARTER_HOUR_MS = 15 * 60_000;
const wrongPassword = 'The e-mail address or the password is wrong';

function isSameCode(given: string, code: string): boolean {
  const digest = (text: string) => createHash('sha256').update(plainWelcomeCode(text)).digest();
  return timingSafeEqual(digest(given), digest(code));
}

export function createAuth(core: Core, options: AuthOptions, changes: AccessChanges): Auth {
  const { clock, writer, reader, config } = core;
  const hasher = createPasswordHasher();
  const sessions = createSessions(core, options.secret, changes);
  // The account's own limit is the widest, so that a stranger's guesses from elsewhere do not soon lock its owner out.
  const byAccount = createAttemptLimit(clock, { attempts: 50, windowMs: QUARTER_HOUR_MS });
  const byAccountAndAddress = createAttemptLimit(clock, { attempts: 10, windowMs: QUARTER_HOUR_MS });
  const byAddress = createAttemptLimit(clock, { attempts: 30, windowMs: QUARTER_HOUR_MS });

  /** Counts the attempt before anything is hashed, and forgets it when it was right. */
  async function limited<Result>(account: string, caller: Caller, attempt: () => Promise<Result>): Promise<Result> {
    const pair = `${account} ${caller.address}`;
    byAddress.take(caller.address);
    byAccountAndAddress.take(pair);
    byAccount.take(account);
    const result = await attempt();
    byAddress.forgive(caller.address);
    byAccountAndAddress.forgive(pair);
    byAccount.forgive(account);
    return result;
  }

  function openSession(tx: Transaction, user: User, caller: Caller): OpenedSession {
    const opened = sessions.open(tx, user, caller.userAgent);
    const actor = { kind: 'user', id: user.id } as const;
    recordAudit(tx, { atMs: clock.nowMs(), siteId: null, actor, action: 'sign-in', entity: 'user', entityId: user.id });
    return opened;
  }

  async function me(userId: string): Promise<Me> {
    const user = await reader.selectFrom('user').select(['id', 'email', 'name']).where('id', '=', userId).executeTakeFirst();
    if (user === undefined) throw new NotSignedInError('The account is gone');
    const memberships = await reader
      .selectFrom('membership')
      .innerJoin('site', 'site.id', 'membership.siteId')
      .select(['site.id as siteId', 'site.name as siteName', 'membership.role'])
      .where('membership.userId', '=', userId)
      .orderBy('site.name')
      .execute();
    return { ...user, memberships };
  }

  return {
    sessions,
    me,

    signIn: (credentials, caller) =>
      limited(credentials.email, caller, async () => {
        const user = await reader.selectFrom('user').selectAll().where('email', '=', credentials.email).executeTakeFirst();
        const isRight = await hasher.verify(user?.passwordHash, credentials.password);
        if (user === undefined || !isRight) {
          core.log.info({ address: caller.address }, 'a sign-in failed');
          throw new NotSignedInError(wrongPassword);
        }
        return writer.commit((tx) => {
          // The password may have been changed while this one was checked.
          if (userByEmail(tx, user.email)?.passwordHash !== user.passwordHash) throw new NotSignedInError(wrongPassword);
          return openSession(tx, user, caller);
        });
      }),

    async welcomeState() {
      const anyone = await reader.selectFrom('user').select('id').limit(1).executeTakeFirst();
      return { open: options.welcomeCode !== null && anyone === undefined, demo: config.DEMO };
    },

    welcome: (form, caller) =>
      limited('welcome', caller, async () => {
        if (options.welcomeCode === null) throw new RuleError('welcome-closed', 'The first account exists already: sign in');
        if (!isSameCode(form.code, options.welcomeCode)) {
          throw new BadInputError([{ path: 'code', message: 'That is not the code that the server printed when it started' }]);
        }
        const passwordHash = await hasher.hash(form.password);
        return writer.commit((tx) => {
          if (hasUsers(tx)) throw new RuleError('welcome-closed', 'The first account exists already: sign in');
          const nowMs = clock.nowMs();
          const user = addUser(tx, { email: form.email, name: form.name, passwordHash, nowMs });
          addSite(tx, { id: uuidv7(), name: form.siteName, timeZone: form.timeZone, ownerId: user.id, nowMs });
          return openSession(tx, user, caller);
        });
      }),

    acceptInvite: (form, caller) => acceptInvite({ core, hasher, limited, openSession }, form, caller),

    async rename(userId, name) {
      await writer.commit((tx) => tx.run(query.updateTable('user').set({ name }).where('id', '=', userId)));
      return me(userId);
    },

    async changePassword(person, form, caller) {
      const user = await reader.selectFrom('user').selectAll().where('id', '=', person.userId).executeTakeFirstOrThrow();
      const ended = await limited(user.email, caller, async () => {
        if (!(await hasher.verify(user.passwordHash, form.current))) {
          throw new BadInputError([{ path: 'current', message: 'That is not your password' }]);
        }
        const passwordHash = await hasher.hash(form.next);
        return writer.commit((tx) => {
          tx.run(query.updateTable('user').set({ passwordHash }).where('id', '=', user.id));
          const actor = { kind: 'user', id: user.id } as const;
          const atMs = clock.nowMs();
          recordAudit(tx, { atMs, siteId: null, actor, action: 'change-password', entity: 'user', entityId: user.id });
          return sessions.endOthers(tx, person);
        });
      });
      sessions.announceEnded(ended);
    },
  };
}
