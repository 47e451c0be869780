import { z } from 'zod';
import { roleSchema } from '../domain/role.ts';
import { inviteBodySchema } from './auth.ts';
import { endpoint } from './endpoint.ts';
import {
  clientIdSchema,
  emptySchema,
  idSchema,
  nameSchema,
  pageOf,
  pageQuerySchema,
  shortListQuerySchema,
  timeZoneSchema,
  timestampSchema,
} from './fields.ts';

export const siteSchema = z.object({ id: idSchema, name: z.string(), timeZone: z.string(), role: roleSchema });
export type Site = z.infer<typeof siteSchema>;

export const memberSchema = z.object({
  userId: idSchema,
  name: z.string(),
  /** Null for viewers, who do not see other members' addresses. */
  email: z.string().nullable(),
  role: roleSchema,
});
export type Member = z.infer<typeof memberSchema>;

export const auditEntrySchema = z.object({
  seq: z.number().int(),
  at: timestampSchema,
  actorKind: z.enum(['user', 'device', 'system']),
  actorId: z.string(),
  actorName: z.string().nullable(),
  action: z.string(),
  entity: z.string(),
  entityId: z.string(),
  before: z.unknown(),
  after: z.unknown(),
});
export type AuditEntry = z.infer<typeof auditEntrySchema>;

export const mailSchema = z.object({
  id: idSchema,
  to: z.string(),
  subject: z.string(),
  body: z.string(),
  state: z.enum(['waiting', 'sent', 'kept', 'failed']),
  createdAt: timestampSchema,
});

export const siteEndpoints = {
  listSites: endpoint({
    method: 'get',
    path: '/sites',
    who: 'signed-in',
    summary: "One's sites",
    query: shortListQuerySchema,
    answer: pageOf(siteSchema),
  }),
  createSite: endpoint({
    method: 'post',
    path: '/sites',
    who: 'signed-in',
    summary: 'Make a site; who makes it owns it',
    body: z.object({ id: clientIdSchema, name: nameSchema, timeZone: timeZoneSchema }),
    answer: siteSchema,
  }),
  listMembers: endpoint({
    method: 'get',
    path: '/sites/:siteId/members',
    who: 'viewer',
    summary: 'Who has a role in the site',
    query: shortListQuerySchema,
    answer: pageOf(memberSchema),
  }),
  invite: endpoint({
    method: 'post',
    path: '/sites/:siteId/invites',
    who: 'owner',
    summary: 'Invite somebody by mail with a one-time link',
    body: inviteBodySchema,
    answer: z.object({ id: idSchema, email: z.string(), role: roleSchema, expiresAt: timestampSchema }),
  }),
  setRole: endpoint({
    method: 'patch',
    path: '/sites/:siteId/members/:userId',
    who: 'owner',
    summary: "Change a member's role; the last owner stays owner",
    body: z.object({ role: roleSchema }),
    answer: memberSchema,
  }),
  removeMember: endpoint({
    method: 'delete',
    path: '/sites/:siteId/members/:userId',
    who: 'owner',
    summary: 'Take a member out of the site; the last owner stays',
    answer: emptySchema,
  }),
  listAudit: endpoint({
    method: 'get',
    path: '/sites/:siteId/audit',
    who: 'sitter',
    summary: 'Who changed what, newest first',
    query: pageQuerySchema,
    answer: pageOf(auditEntrySchema),
  }),
  listOutbox: endpoint({
    method: 'get',
    path: '/sites/:siteId/outbox',
    who: 'owner',
    summary: 'Mail that this site sent or, without a mail server, kept here',
    query: pageQuerySchema,
    answer: pageOf(mailSchema),
  }),
};
