import { randomBytes } from 'node:crypto';
import type { Member, Site } from '#shared/contract/sites.ts';
import type { Role } from '#shared/domain/role.ts';
import type { AccessChanges } from '../access/access-changes.ts';
import { recordAudit } from '../audit/record-audit.ts';
import { createAttemptLimit } from '../auth/attempt-limit.ts';
import { hashOfToken } from '../auth/hash-of-token.ts';
import type { Core } from '../core.ts';
import { query } from '../db/open.ts';
import type { Transaction } from '../db/writer.ts';
import { NotFoundError, RuleError } from '../errors.ts';
import type { Notify } from '../notify/create-notify.ts';
import { claimId } from '../requests/claim-id.ts';
import type { Made } from '../requests/made.ts';
import { addSite } from './add-site.ts';
import { inviteMail } from './invite-mail.ts';

const INVITE_MS = 7 * 86_400_000;

export interface Invited {
  id: string;
  email: string;
  role: Role;
  expiresAt: string;
}

export interface Sites {
  list(userId: string): Promise<Site[]>;
  create(userId: string, form: { id?: string; name: string; timeZone: string }): Promise<Made<Site>>;
  /** Addresses are left out for viewers. */
  members(siteId: string, reader: Role): Promise<Member[]>;
  invite(siteId: string, invitedBy: string, form: { id?: string; email: string; role: Role }): Promise<Made<Invited>>;
  /** @throws {RuleError} `last-owner` */
  setRole(siteId: string, actorId: string, userId: string, role: Role): Promise<Member>;
  /** @throws {RuleError} `last-owner` */
  remove(siteId: string, actorId: string, userId: string): Promise<void>;
}

export interface SitesOptions {
  core: Core;
  changes: AccessChanges;
  notify: Notify;
  /** Where people reach the app: the links in mails begin with it. */
  publicUrl: () => string;
}

export function createSites({ core, changes, notify, publicUrl }: SitesOptions): Sites {
  const { clock, writer, reader } = core;
  const invitesOfSite = createAttemptLimit(clock, { attempts: 30, windowMs: 3_600_000 });

  function membership(tx: Transaction, siteId: string, userId: string): Member {
    const member = tx.first(
      query
        .selectFrom('membership')
        .innerJoin('user', 'user.id', 'membership.userId')
        .select(['user.id as userId', 'user.name', 'user.email', 'membership.role'])
        .where('membership.siteId', '=', siteId)
        .where('membership.userId', '=', userId),
    );
    if (member === undefined) throw new NotFoundError('There is no such member in this site');
    return member;
  }

  function requireAnotherOwner(tx: Transaction, siteId: string, userId: string): void {
    const other = tx.first(
      query
        .selectFrom('membership')
        .select('userId')
        .where('siteId', '=', siteId)
        .where('role', '=', 'owner')
        .where('userId', '!=', userId)
        .limit(1),
    );
    if (other === undefined) throw new RuleError('last-owner', 'A site keeps at least one owner: make somebody else an owner first');
  }

  function audited(
    tx: Transaction,
    change: { siteId: string; actorId: string; action: string; userId: string; before: unknown; after?: unknown },
  ) {
    recordAudit(tx, {
      atMs: clock.nowMs(),
      siteId: change.siteId,
      actor: { kind: 'user', id: change.actorId },
      action: change.action,
      entity: 'membership',
      entityId: change.userId,
      before: change.before,
      after: change.after,
    });
  }

  return {
    list: (userId) =>
      reader
        .selectFrom('membership')
        .innerJoin('site', 'site.id', 'membership.siteId')
        .select(['site.id', 'site.name', 'site.timeZone', 'membership.role'])
        .where('membership.userId', '=', userId)
        .orderBy('site.id', 'desc')
        .execute(),

    create: (userId, form) =>
      writer.commit((tx) => {
        const { id: clientId, ...body } = form;
        const nowMs = clock.nowMs();
        const claim = claimId(tx, { siteId: '', kind: `site:${userId}`, id: clientId, body, nowMs });
        if (!claim.isRepeated) addSite(tx, { id: claim.id, ...body, ownerId: userId, nowMs });
        const { role } = membership(tx, claim.id, userId);
        const site = tx.first(query.selectFrom('site').select(['id', 'name', 'timeZone']).where('id', '=', claim.id));
        if (site === undefined) throw new NotFoundError('The site is gone');
        return { value: { ...site, role }, isRepeated: claim.isRepeated };
      }),

    async members(siteId, role) {
      const members = await reader
        .selectFrom('membership')
        .innerJoin('user', 'user.id', 'membership.userId')
        .select(['user.id as userId', 'user.name', 'user.email', 'membership.role'])
        .where('membership.siteId', '=', siteId)
        .orderBy('membership.createdAtMs', 'desc')
        .orderBy('user.id', 'desc')
        .execute();
      return role === 'viewer' ? members.map((member) => ({ ...member, email: null })) : members;
    },

    async invite(siteId, invitedBy, form) {
      invitesOfSite.take(siteId);
      return writer.commit((tx) => {
        const { id: clientId, ...body } = form;
        const nowMs = clock.nowMs();
        const { id, isRepeated } = claimId(tx, { siteId, kind: 'invite', id: clientId, body, nowMs });
        if (!isRepeated) {
          const isMember = tx.first(
            query
              .selectFrom('membership')
              .innerJoin('user', 'user.id', 'membership.userId')
              .select('user.id')
              .where('membership.siteId', '=', siteId)
              .where('user.email', '=', body.email),
          );
          if (isMember !== undefined)
            throw new RuleError('already-member', 'This person is in the site already: change their role instead');
          const token = randomBytes(32).toString('base64url');
          const expiresAtMs = nowMs + INVITE_MS;
          const invite = {
            id,
            siteId,
            ...body,
            tokenHash: hashOfToken(token),
            invitedBy,
            createdAtMs: nowMs,
            expiresAtMs,
            acceptedAtMs: null,
          };
          tx.run(query.insertInto('invite').values(invite));
          const site = tx.first(query.selectFrom('site').select('name').where('id', '=', siteId));
          const mail = inviteMail({ siteName: site?.name ?? '', role: body.role, link: `${publicUrl()}/join?token=${token}` });
          notify.enqueue(tx, { dedupeKey: `invite:${id}`, siteId, toAddress: body.email, ...mail, nowMs });
          recordAudit(tx, {
            atMs: nowMs,
            siteId,
            actor: { kind: 'user', id: invitedBy },
            action: 'create',
            entity: 'invite',
            entityId: id,
            after: body,
          });
        }
        const stored = tx.first(query.selectFrom('invite').select(['id', 'email', 'role', 'expiresAtMs']).where('id', '=', id));
        if (stored === undefined) throw new RuleError('id-expired', 'This invitation has expired: send it again with a new id');
        const { expiresAtMs, ...invited } = stored;
        return { value: { ...invited, expiresAt: new Date(expiresAtMs).toISOString() }, isRepeated };
      });
    },

    async setRole(siteId, actorId, userId, role) {
      const member = await writer.commit((tx) => {
        const before = membership(tx, siteId, userId);
        if (before.role === role) return before;
        if (before.role === 'owner') requireAnotherOwner(tx, siteId, userId);
        tx.run(query.updateTable('membership').set({ role }).where('siteId', '=', siteId).where('userId', '=', userId));
        audited(tx, { siteId, actorId, action: 'update', userId, before: { role: before.role }, after: { role } });
        return { ...before, role };
      });
      changes.announce({ kind: 'role-changed', userId, siteId });
      return member;
    },

    async remove(siteId, actorId, userId) {
      await writer.commit((tx) => {
        const before = membership(tx, siteId, userId);
        if (before.role === 'owner') requireAnotherOwner(tx, siteId, userId);
        tx.run(query.deleteFrom('membership').where('siteId', '=', siteId).where('userId', '=', userId));
        audited(tx, { siteId, actorId, action: 'delete', userId, before: { role: before.role } });
      });
      changes.announce({ kind: 'role-changed', userId, siteId });
    },
  };
}
