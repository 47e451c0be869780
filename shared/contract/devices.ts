import { z } from 'zod';
import { endpoint } from './endpoint.ts';
import { clientIdSchema, idSchema, nameSchema, pageOf, pageQuerySchema, shortListQuerySchema, timestampSchema } from './fields.ts';

export const reportedHeadSchema = z.object({
  head: z.number().int(),
  state: z.enum(['idle', 'dosing', 'stopped']),
  odometerMl: z.number().nullable(),
  odometerEpoch: z.number().int().nullable(),
});

/** What a device last said of itself. */
export const deviceStateSchema = z.object({
  deviceId: idSchema,
  online: z.boolean(),
  heardAt: timestampSchema.nullable(),
  changedAt: timestampSchema.nullable(),
  scheduleVersion: z.number().int().nullable(),
  /** The device's clock less ours, seconds; null when it is not known. */
  clockOffsetSeconds: z.number().nullable(),
  clockUnset: z.boolean(),
  heads: z.array(reportedHeadSchema),
});
export type DeviceState = z.infer<typeof deviceStateSchema>;

export const deviceSchema = z.object({
  id: idSchema,
  systemId: idSchema,
  name: z.string(),
  kind: z.enum(['pump', 'probe', 'other']),
  /** Null until the device was heard for the first time. */
  state: deviceStateSchema.nullable(),
  /** The schedule version published for it; null when none was. */
  publishedScheduleVersion: z.number().int().nullable(),
  rejects: z.number().int(),
});
export type Device = z.infer<typeof deviceSchema>;

export const credentialsSchema = z.object({ username: z.string(), password: z.string() });

export const rawMessageSchema = z.object({
  seq: z.number().int(),
  at: timestampSchema,
  topic: z.string(),
  bytes: z.number().int(),
  payload: z.string(),
  outcome: z.string(),
});

export const rejectSchema = z.object({
  seq: z.number().int(),
  at: timestampSchema,
  topic: z.string(),
  /** A code such as `not-json`, `wrong-shape`, `too-early`, `too-far-ahead`, `not-finite`, `too-big`. */
  reason: z.string(),
  payload: z.string(),
});

export const deviceEndpoints = {
  listDevices: endpoint({
    method: 'get',
    path: '/systems/:systemId/devices',
    who: 'viewer',
    summary: 'The pumps and probes of a system',
    query: shortListQuerySchema,
    answer: pageOf(deviceSchema),
  }),
  createDevice: endpoint({
    method: 'post',
    path: '/systems/:systemId/devices',
    who: 'keeper',
    summary: 'Register a device; the password is shown this once',
    body: z.object({ id: clientIdSchema, name: nameSchema, kind: z.enum(['pump', 'probe', 'other']) }),
    /** The password is null when the request is repeated: it was shown once, and only its hash is kept. Renew it if it got lost. */
    answer: z.object({ device: deviceSchema, credentials: credentialsSchema.extend({ password: z.string().nullable() }) }),
  }),
  renewCredentials: endpoint({
    method: 'post',
    path: '/devices/:deviceId/credentials',
    who: 'keeper',
    summary: 'Give a device a new password; the old one stops at once',
    answer: z.object({ device: deviceSchema, credentials: credentialsSchema }),
  }),
  listMessages: endpoint({
    method: 'get',
    path: '/devices/:deviceId/messages',
    who: 'sitter',
    summary: 'The newest raw messages of a device since the server started',
    query: shortListQuerySchema,
    answer: pageOf(rawMessageSchema),
  }),
  listRejects: endpoint({
    method: 'get',
    path: '/devices/:deviceId/rejects',
    who: 'sitter',
    summary: 'Messages of a device that were refused, with the reason',
    query: pageQuerySchema,
    answer: pageOf(rejectSchema),
  }),
};
