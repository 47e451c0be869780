import { z } from 'zod';
import { endpoint } from './endpoint.ts';
import {
  clientIdSchema,
  emptySchema,
  idSchema,
  millilitresSchema,
  noteSchema,
  pageOf,
  pageQuerySchema,
  rangeTimeSchema,
  timestampSchema,
} from './fields.ts';
import { testQuantities, testUnits } from '../units/nutrient-units.ts';

export const testQuantitySchema = z.enum(testQuantities);
export type TestQuantity = z.infer<typeof testQuantitySchema>;

export const testSchema = z.object({
  id: idSchema,
  systemId: idSchema,
  at: timestampSchema,
  quantity: testQuantitySchema,
  value: z.number(),
  unit: z.enum(testUnits),
  /** True: the result is "under `value`", which is a result of its own and never 0. */
  below: z.boolean(),
  /** As mg/L of the ion (alkalinity: as mg/L CaCO3). */
  canonicalMgPerL: z.number(),
  note: z.string(),
  /** The name of who wrote it down. */
  by: z.string(),
  /** Their user id: a sitter may change one's own tests only. */
  byId: z.string(),
  edited: z.boolean(),
});
export type Test = z.infer<typeof testSchema>;

const testFieldsSchema = z.object({
  at: timestampSchema,
  quantity: testQuantitySchema,
  value: z.number('Give a number').min(0, 'A result cannot be negative').max(100_000),
  unit: z.enum(testUnits),
  below: z.boolean().default(false),
  note: noteSchema,
});

/** Without defaults: a partial schema would fill them in and so change what was not sent. */
const testChangesSchema = testFieldsSchema.extend({ below: z.boolean(), note: noteSchema.unwrap() }).partial();

export const importRowSchema = z.object({
  line: z.number().int(),
  fate: z.enum(['new', 'same', 'refused']),
  why: z.string().nullable(),
  quantity: z.string(),
  at: z.string(),
  value: z.string(),
  unit: z.string(),
});

export const handDoseSchema = z.object({
  id: idSchema,
  systemId: idSchema,
  productId: idSchema,
  at: timestampSchema,
  ml: z.number(),
  by: z.string(),
});
export type HandDose = z.infer<typeof handDoseSchema>;

export const eventKinds = ['fish', 'feeding', 'water-change', 'volume', 'media', 'cleaning', 'equipment', 'observation', 'note'] as const;

export const eventSchema = z.object({
  id: idSchema,
  systemId: idSchema,
  kind: z.enum(eventKinds),
  at: timestampSchema,
  litres: z.number().nullable(),
  note: z.string(),
  by: z.string(),
});
export type Event = z.infer<typeof eventSchema>;

const listQuerySchema = pageQuerySchema.extend({ from: rangeTimeSchema.optional(), to: rangeTimeSchema.optional() });

export const recordEndpoints = {
  listTests: endpoint({
    method: 'get',
    path: '/systems/:systemId/tests',
    who: 'viewer',
    summary: 'Tests by hand, newest first',
    query: listQuerySchema.extend({ quantity: testQuantitySchema.optional() }),
    answer: pageOf(testSchema),
  }),
  createTest: endpoint({
    method: 'post',
    path: '/systems/:systemId/tests',
    who: 'sitter',
    summary: 'Write down a test',
    body: testFieldsSchema.extend({ id: clientIdSchema }),
    answer: testSchema,
  }),
  updateTest: endpoint({
    method: 'patch',
    path: '/tests/:testId',
    who: 'sitter',
    summary: "Correct a test: one's own, or as keeper anybody's; what it was is kept",
    body: testChangesSchema,
    answer: testSchema,
  }),
  deleteTest: endpoint({
    method: 'delete',
    path: '/tests/:testId',
    who: 'sitter',
    summary: "Take a test out: one's own, or as keeper anybody's; posting it again with its id brings it back",
    answer: emptySchema,
  }),
  importTests: endpoint({
    method: 'post',
    status: 200,
    path: '/systems/:systemId/tests/import',
    who: 'keeper',
    summary: 'Import tests from a CSV file (multipart field `file`); `dryRun=1` only tells the fate of each row',
    query: z.object({ dryRun: z.enum(['0', '1']).default('0') }),
    answer: z.object({ rows: z.array(importRowSchema), added: z.number().int(), refused: z.number().int() }),
  }),
  listHandDoses: endpoint({
    method: 'get',
    path: '/systems/:systemId/hand-doses',
    who: 'viewer',
    summary: 'Carbon given by hand, newest first',
    query: listQuerySchema,
    answer: pageOf(handDoseSchema),
  }),
  createHandDose: endpoint({
    method: 'post',
    path: '/systems/:systemId/hand-doses',
    who: 'sitter',
    summary: 'Write down carbon given by hand; it counts in every limit',
    body: z.object({ id: clientIdSchema, productId: idSchema, at: timestampSchema, ml: millilitresSchema }),
    answer: handDoseSchema,
  }),
  listEvents: endpoint({
    method: 'get',
    path: '/systems/:systemId/events',
    who: 'viewer',
    summary: 'What happened to the system, newest first',
    query: listQuerySchema,
    answer: pageOf(eventSchema),
  }),
  createEvent: endpoint({
    method: 'post',
    path: '/systems/:systemId/events',
    who: 'sitter',
    summary: 'Write down what happened',
    body: z.object({
      id: clientIdSchema,
      kind: z.enum(eventKinds),
      at: timestampSchema,
      litres: z.number().positive().max(1_000_000).nullable().default(null),
      note: noteSchema,
    }),
    answer: eventSchema,
  }),
};
