import { z } from 'zod';
import { endpoint } from './endpoint.ts';
import { idSchema, pageOf, shortListQuerySchema, timestampSchema } from './fields.ts';
import { headSchema } from './rig.ts';

export const orderOutcomeSchema = z.object({
  id: idSchema,
  deviceId: idSchema,
  head: z.number().int(),
  /** `waiting`: the pump is offline, and gets the order when it comes back. `no-answer`: it is online and silent. */
  outcome: z.enum(['done', 'refused', 'expired', 'waiting', 'no-answer']),
  why: z.string().nullable(),
  /** When the pump said so. */
  at: timestampSchema.nullable(),
});
export type OrderOutcome = z.infer<typeof orderOutcomeSchema>;

export const stopAnswerSchema = z.object({ orders: z.array(orderOutcomeSchema) });
export type StopAnswer = z.infer<typeof stopAnswerSchema>;

const overrideSchema = z.strictObject({ reason: z.string().trim().min(10, 'Write down why, in at least 10 characters').max(1000) });

export const scheduleEntrySchema = z
  .strictObject({
    headId: idSchema,
    mlPerDay: z.number().min(0, 'Give mL per day, 0 for no dose').max(10_000),
    slots: z.number().int().min(1).max(96).optional(),
    slotsUtcMin: z.array(z.number().int().min(0).max(1439)).min(1).max(96).optional(),
  })
  .refine((entry) => entry.slots !== undefined || entry.slotsUtcMin !== undefined, {
    path: ['slots'],
    message: 'Give the number of portions, or their times',
  });

export const controlEndpoints = {
  putSchedule: endpoint({
    method: 'put',
    path: '/systems/:systemId/schedule',
    who: 'keeper',
    summary: 'Set the schedule by hand; above the ceiling only with a written override of the owner',
    body: z.strictObject({
      heads: z.array(scheduleEntrySchema).min(1).max(32),
      override: overrideSchema.optional(),
      /** Said once where no label or composition tells a ceiling. */
      confirmUnknownCeiling: z.boolean().default(false),
    }),
    answer: z.object({ heads: z.array(headSchema) }),
  }),
  stop: endpoint({
    method: 'post',
    status: 200,
    path: '/systems/:systemId/stop',
    who: 'sitter',
    summary: 'Stop the carbon heads (or the heads named) and keep them stopped; waits up to 5 s for the pumps',
    body: z.object({ heads: z.array(idSchema).min(1).max(32).optional() }).default({}),
    answer: stopAnswerSchema,
  }),
  resume: endpoint({
    method: 'post',
    status: 200,
    path: '/systems/:systemId/resume',
    who: 'keeper',
    summary: 'Let stopped heads dose again; refused while an alarm is latched or after 48 h off without a new dose',
    body: z.object({ heads: z.array(idSchema).min(1).max(32).optional() }).default({}),
    answer: stopAnswerSchema,
  }),
  listOrders: endpoint({
    method: 'get',
    path: '/systems/:systemId/orders',
    who: 'viewer',
    summary: 'The newest orders to the pumps of a system with what became of them',
    query: shortListQuerySchema,
    answer: pageOf(orderOutcomeSchema.extend({ do: z.enum(['stop', 'resume', 'dose', 'prime']), createdAt: timestampSchema })),
  }),
};
