import { z } from 'zod';
import { roleSchema } from '../domain/role.ts';
import { endpoint } from './endpoint.ts';
import {
  clientIdSchema,
  emptySchema,
  idSchema,
  nameSchema,
  pageOf,
  shortListQuerySchema,
  timeZoneSchema,
  timestampSchema,
} from './fields.ts';

export const emailSchema = z
  .email('Give an e-mail address')
  .max(254)
  .transform((address) => address.toLowerCase());

/** At least 12 characters, no composition rules; long passphrases and paste are welcome. */
export const newPasswordSchema = z
  .string()
  .min(12, 'Use at least 12 characters; a few plain words are fine')
  .max(256, 'Use at most 256 characters');

export const userSchema = z.object({ id: idSchema, email: z.string(), name: z.string() });
export type User = z.infer<typeof userSchema>;

export const sessionGrantSchema = z.object({ accessToken: z.string(), expiresIn: z.number().int(), user: userSchema });
export type SessionGrant = z.infer<typeof sessionGrantSchema>;

export const membershipSchema = z.object({ siteId: idSchema, siteName: z.string(), role: roleSchema });

export const meSchema = userSchema.extend({ memberships: z.array(membershipSchema) });
export type Me = z.infer<typeof meSchema>;

export const sessionSchema = z.object({
  id: idSchema,
  createdAt: timestampSchema,
  lastUsedAt: timestampSchema,
  userAgent: z.string(),
  current: z.boolean(),
});

export const authEndpoints = {
  signIn: endpoint({
    method: 'post',
    status: 200,
    path: '/auth/sign-in',
    who: 'anyone',
    summary: 'Sign in with e-mail and password; sets the refresh cookie',
    body: z.object({ email: emailSchema, password: z.string().min(1, 'Give your password').max(256) }),
    answer: sessionGrantSchema,
  }),
  refresh: endpoint({
    method: 'post',
    status: 200,
    path: '/auth/refresh',
    who: 'anyone',
    summary: 'Trade the refresh cookie for a new access token and a new cookie',
    answer: sessionGrantSchema,
  }),
  signOut: endpoint({
    method: 'post',
    status: 200,
    path: '/auth/sign-out',
    who: 'anyone',
    summary: 'End the session of the refresh cookie',
    answer: emptySchema,
  }),
  welcomeState: endpoint({
    method: 'get',
    path: '/auth/welcome',
    who: 'anyone',
    summary: 'Whether the first account is still to be made, and whether this is the demo',
    answer: z.object({ open: z.boolean(), demo: z.boolean() }),
  }),
  welcome: endpoint({
    method: 'post',
    path: '/auth/welcome',
    who: 'anyone',
    summary: 'Make the first account with the one-time code printed at start; it owns the first site',
    body: z.object({
      code: z.string().trim().min(1, 'Give the code that the server printed at start').max(64),
      email: emailSchema,
      name: nameSchema,
      password: newPasswordSchema,
      siteName: nameSchema,
      timeZone: timeZoneSchema,
    }),
    answer: sessionGrantSchema,
  }),
  acceptInvite: endpoint({
    method: 'post',
    path: '/auth/invites/accept',
    who: 'anyone',
    summary: 'Join a site by the one-time link of an invitation; makes the account when there is none',
    body: z.object({
      token: z.string().min(20).max(200),
      name: nameSchema,
      password: z.string().min(1).max(256),
    }),
    answer: sessionGrantSchema,
  }),
  me: endpoint({ method: 'get', path: '/me', who: 'signed-in', summary: 'Who is signed in, and where they have a role', answer: meSchema }),
  updateMe: endpoint({
    method: 'patch',
    path: '/me',
    who: 'signed-in',
    summary: "Change one's name",
    body: z.object({ name: nameSchema }),
    answer: meSchema,
  }),
  changePassword: endpoint({
    method: 'post',
    status: 200,
    path: '/me/password',
    who: 'signed-in',
    summary: 'Change the password; every other session ends',
    body: z.object({ current: z.string().min(1).max(256), next: newPasswordSchema }),
    answer: emptySchema,
  }),
  sessions: endpoint({
    method: 'get',
    path: '/me/sessions',
    who: 'signed-in',
    summary: "One's open sessions",
    query: shortListQuerySchema,
    answer: pageOf(sessionSchema),
  }),
  endSession: endpoint({
    method: 'delete',
    path: '/me/sessions/:sessionId',
    who: 'signed-in',
    summary: "End one of one's sessions",
    answer: emptySchema,
  }),
};

export const inviteBodySchema = z.object({ id: clientIdSchema, email: emailSchema, role: roleSchema });
