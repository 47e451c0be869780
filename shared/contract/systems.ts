import { z } from 'zod';
import { roleSchema } from '../domain/role.ts';
import { endpoint } from './endpoint.ts';
import { clientIdSchema, idSchema, litresSchema, nameSchema, pageOf, shortListQuerySchema, timestampSchema } from './fields.ts';

export const prioritySchema = z.enum(['low', 'medium', 'high', 'urgent']);
export type Priority = z.infer<typeof prioritySchema>;

const latestTestSchema = z.object({
  at: timestampSchema,
  canonicalMgPerL: z.number(),
  below: z.boolean(),
});

/** Facts from which the sentence of a system is made on the screen that shows it. */
export const systemStatusSchema = z.object({
  /** Highest priority among the open alarms, null when there is none. */
  worstPriority: prioritySchema.nullable(),
  openAlarms: z.number().int(),
  unacknowledgedAlarms: z.number().int(),
  latched: z.boolean(),
  /** Carbon heads that a person or an interlock keeps stopped. */
  stoppedHeads: z.number().int(),
  /** Those of them whose pump has not yet said that they are stopped: they may still dose. */
  unconfirmedStops: z.number().int(),
  carbonHeads: z.number().int(),
  /** Devices that were heard once and are offline now. */
  offlineDevices: z.number().int(),
  heardAt: timestampSchema.nullable(),
  /** Carbon given since the site's midnight, all heads and hand doses, mL. */
  givenTodayMl: z.number(),
  /** Carbon planned from the site's midnight to the next, mL; null without a schedule. */
  plannedTodayMl: z.number().nullable(),
  /** Carbon planned from the site's midnight until now, mL; null without a schedule. */
  plannedSoFarMl: z.number().nullable(),
  nitrate: latestTestSchema.nullable(),
  phosphate: latestTestSchema.nullable(),
});
export type SystemStatus = z.infer<typeof systemStatusSchema>;

export const systemSchema = z.object({
  id: idSchema,
  siteId: idSchema,
  siteName: z.string(),
  timeZone: z.string(),
  role: roleSchema,
  name: z.string(),
  displayLitres: z.number(),
  sumpLitres: z.number(),
  displacementLitres: z.number(),
  netLitres: z.number(),
  status: systemStatusSchema,
});
export type System = z.infer<typeof systemSchema>;

export const systemBodySchema = z.strictObject({
  id: clientIdSchema,
  name: nameSchema,
  displayLitres: litresSchema,
  sumpLitres: z.number().min(0, 'Give litres, 0 without a sump').max(1_000_000),
  displacementLitres: z.number().min(0, 'Give litres, 0 when nothing displaces water').max(1_000_000),
});

export const systemEndpoints = {
  listSystems: endpoint({
    method: 'get',
    path: '/systems',
    who: 'signed-in',
    summary: "The systems of all one's sites, worst first",
    query: shortListQuerySchema,
    answer: pageOf(systemSchema),
  }),
  getSystem: endpoint({
    method: 'get',
    path: '/systems/:systemId',
    who: 'viewer',
    summary: 'One system with its status',
    answer: systemSchema,
  }),
  createSystem: endpoint({
    method: 'post',
    path: '/sites/:siteId/systems',
    who: 'keeper',
    summary: 'Add a system; the displacement must be under the gross volume',
    body: systemBodySchema,
    answer: systemSchema,
  }),
  updateSystem: endpoint({
    method: 'patch',
    path: '/systems/:systemId',
    who: 'keeper',
    summary: "Change a system's name or volumes",
    body: systemBodySchema.omit({ id: true }).partial(),
    answer: systemSchema,
  }),
};
