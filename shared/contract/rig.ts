import { z } from 'zod';
import { endpoint } from './endpoint.ts';
import { clientIdSchema, idSchema, millilitresSchema, nameSchema, pageOf, shortListQuerySchema, timestampSchema } from './fields.ts';

export const headSchema = z.object({
  id: idSchema,
  deviceId: idSchema,
  deviceName: z.string(),
  head: z.number().int(),
  systemId: idSchema,
  kind: z.enum(['carbon', 'other']),
  productId: idSchema.nullable(),
  reservoirId: idSchema.nullable(),
  mlPerSecond: z.number(),
  smallestMl: z.number(),
  /** The schedule set for this head, null when none is. */
  schedule: z
    .object({ mlPerDay: z.number(), slotMl: z.number(), slotsUtcMin: z.array(z.number().int()), since: timestampSchema })
    .nullable(),
  /** Open when a person or an interlock keeps the head stopped. */
  stop: z
    .object({
      cause: z.enum(['person', 'interlock']),
      alarmId: idSchema.nullable(),
      at: timestampSchema,
      /** When the pump itself said that this head is stopped; null until it has, and again once it says otherwise. */
      confirmedAt: timestampSchema.nullable(),
    })
    .nullable(),
});
export type Head = z.infer<typeof headSchema>;

const headNumberSchema = z.number().int().min(1).max(16);

const headFieldsSchema = z.strictObject({
  kind: z.enum(['carbon', 'other']),
  productId: idSchema.nullable().default(null),
  reservoirId: idSchema.nullable().default(null),
  mlPerSecond: z.number().positive('Give the delivery rate, above 0 mL/s').max(50),
  smallestMl: z.number().positive('Give the smallest accurate portion, above 0 mL').max(1000),
});

/** Without defaults: a partial schema would fill them in and so take a head off its bottle unasked. */
const headChangesSchema = headFieldsSchema.extend({ productId: idSchema.nullable(), reservoirId: idSchema.nullable() }).partial();

export const reservoirSchema = z.object({
  id: idSchema,
  systemId: idSchema,
  name: z.string(),
  capacityMl: z.number(),
  levelSeriesId: idSchema.nullable(),
  /** The last refill; null before the first. */
  lastRefill: z.object({ at: timestampSchema, ml: z.number(), productId: idSchema }).nullable(),
  /** What should be left: last refill less what its heads delivered since; null before the first refill. */
  remainingMl: z.number().nullable(),
  /** When it will be empty at the planned daily dose; null without a refill or a schedule. */
  lastsUntil: timestampSchema.nullable(),
});
export type Reservoir = z.infer<typeof reservoirSchema>;

const reservoirFieldsSchema = z.object({
  name: nameSchema,
  capacityMl: millilitresSchema,
  levelSeriesId: idSchema.nullable().default(null),
});

export const refillSchema = z.object({
  id: idSchema,
  reservoirId: idSchema,
  productId: idSchema,
  at: timestampSchema,
  ml: z.number(),
  lot: z.string(),
});

export const rigEndpoints = {
  listHeads: endpoint({
    method: 'get',
    path: '/systems/:systemId/heads',
    who: 'viewer',
    summary: 'The heads in use on a system',
    query: shortListQuerySchema,
    answer: pageOf(headSchema),
  }),
  createHead: endpoint({
    method: 'post',
    path: '/systems/:systemId/heads',
    who: 'keeper',
    summary: 'Put a head of a pump to use on a system',
    body: headFieldsSchema.extend({ id: clientIdSchema, deviceId: idSchema, head: headNumberSchema }),
    answer: headSchema,
  }),
  updateHead: endpoint({
    method: 'patch',
    path: '/heads/:headId',
    who: 'keeper',
    summary: 'Change what a head is used for, from now on; earlier runs keep what was in force',
    body: headChangesSchema,
    answer: headSchema,
  }),
  listReservoirs: endpoint({
    method: 'get',
    path: '/systems/:systemId/reservoirs',
    who: 'viewer',
    summary: 'The bottles that heads draw from',
    query: shortListQuerySchema,
    answer: pageOf(reservoirSchema),
  }),
  createReservoir: endpoint({
    method: 'post',
    path: '/systems/:systemId/reservoirs',
    who: 'keeper',
    summary: 'Add a reservoir',
    body: reservoirFieldsSchema.extend({ id: clientIdSchema }),
    answer: reservoirSchema,
  }),
  createRefill: endpoint({
    method: 'post',
    path: '/reservoirs/:reservoirId/refills',
    who: 'sitter',
    summary: 'Write down a refill: the reservoir now holds `ml` of the product',
    body: z.object({
      id: clientIdSchema,
      productId: idSchema,
      at: timestampSchema,
      ml: millilitresSchema,
      lot: z.string().trim().max(80).default(''),
    }),
    answer: refillSchema,
  }),
};
