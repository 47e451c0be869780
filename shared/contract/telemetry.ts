import { z } from 'zod';
import { endpoint } from './endpoint.ts';
import { idSchema, nameSchema, pageOf, pageQuerySchema, rangeTimeSchema, shortListQuerySchema, timestampSchema } from './fields.ts';

export const quantities = ['temperature', 'ph', 'orp', 'conductivity', 'oxygen-percent', 'oxygen', 'level', 'power', 'flow'] as const;
export const quantitySchema = z.enum(quantities);
export type Quantity = z.infer<typeof quantitySchema>;

export const seriesSchema = z.object({
  id: idSchema,
  systemId: idSchema,
  deviceId: idSchema,
  channel: z.string(),
  name: z.string().nullable(),
  /** Null until the unit, the channel's name or a keeper tells what it is. */
  quantity: quantitySchema.nullable(),
  unit: z.string(),
  /** Epoch milliseconds of the newest sample, by the device's time. */
  lastT: z.number().int().nullable(),
  lastValue: z.number().nullable(),
  /** Samples that came again with another value; the first stayed. */
  conflicts: z.number().int(),
});
export type Series = z.infer<typeof seriesSchema>;

export const pointsSchema = z.object({
  /** 0 for raw samples, else the width of a bucket. */
  resolutionMs: z.number().int(),
  t: z.array(z.number().int()),
  min: z.array(z.number()),
  mean: z.array(z.number()),
  max: z.array(z.number()),
  count: z.array(z.number().int()),
});
export type Points = z.infer<typeof pointsSchema>;

export const runSchema = z.object({
  /** The id that the device gave; unique for the device. */
  id: z.string(),
  deviceId: idSchema,
  headId: idSchema.nullable(),
  head: z.number().int(),
  kind: z.enum(['carbon', 'other']),
  beganAt: timestampSchema,
  endedAt: timestampSchema.nullable(),
  ml: z.number(),
  cause: z.enum(['schedule', 'order', 'button', 'prime', 'calibration']),
  dueAt: timestampSchema.nullable(),
  interrupted: z.boolean(),
  flags: z.array(z.string()),
});
export type Run = z.infer<typeof runSchema>;

const rangeQuerySchema = z
  .object({ from: rangeTimeSchema, to: rangeTimeSchema })
  .refine((range) => range.to > range.from, { path: ['to'], message: 'The end must be after the start' });

/** One planned portion, as the schedules in force planned it. */
export const slotSchema = z.object({
  headId: idSchema.nullable(),
  deviceId: idSchema,
  head: z.number().int(),
  dueT: z.number().int(),
  ml: z.number(),
  mark: z.enum(['planned', 'running', 'delivered', 'partial', 'unheard', 'missed', 'held', 'interlocked']),
  deliveredMl: z.number(),
  runId: z.string().nullable(),
});
export type Slot = z.infer<typeof slotSchema>;

/** A delivery that no slot planned: a hand dose, or a run by button, order or fault. */
export const extraDoseSchema = z.object({
  kind: z.enum(['hand', 'unplanned']),
  t: z.number().int(),
  ml: z.number(),
  deviceId: idSchema.nullable(),
  head: z.number().int().nullable(),
  sourceId: z.string(),
});
export type ExtraDose = z.infer<typeof extraDoseSchema>;

export const tapeSchema = z.object({
  fromT: z.number().int(),
  toT: z.number().int(),
  nowT: z.number().int(),
  slots: z.array(slotSchema),
  extras: z.array(extraDoseSchema),
  givenMl: z.number(),
  plannedMl: z.number(),
  plannedSoFarMl: z.number(),
});
export type Tape = z.infer<typeof tapeSchema>;

/** Carbon of a system by bucket, and the dose planned per day, for the dose lane. */
export const doseColumnsSchema = z.object({
  resolutionMs: z.number().int(),
  t: z.array(z.number().int()),
  pumpMl: z.array(z.number()),
  handMl: z.array(z.number()),
  planned: z.array(z.object({ fromT: z.number().int(), mlPerDay: z.number() })),
});
export type DoseColumns = z.infer<typeof doseColumnsSchema>;

export const telemetryEndpoints = {
  listSeries: endpoint({
    method: 'get',
    path: '/systems/:systemId/series',
    who: 'viewer',
    summary: 'The measured series of a system',
    query: shortListQuerySchema,
    answer: pageOf(seriesSchema),
  }),
  updateSeries: endpoint({
    method: 'patch',
    path: '/series/:seriesId',
    who: 'keeper',
    summary: 'Name a series, or say what it measures',
    body: z.object({ name: nameSchema.nullable(), quantity: quantitySchema.nullable() }).partial(),
    answer: seriesSchema,
  }),
  getPoints: endpoint({
    method: 'get',
    path: '/series/:seriesId/points',
    who: 'viewer',
    summary: 'A series over a range as columns: raw when they fit, else the smallest fitting buckets',
    query: rangeQuerySchema.and(z.object({ points: z.coerce.number().int().min(1).max(5000).default(1000) })),
    answer: pointsSchema,
  }),
  listRuns: endpoint({
    method: 'get',
    path: '/systems/:systemId/runs',
    who: 'viewer',
    summary: 'Deliveries as the pumps reported them, newest first',
    query: pageQuerySchema.extend({ from: rangeTimeSchema.optional(), to: rangeTimeSchema.optional() }),
    answer: pageOf(runSchema),
  }),
  getTape: endpoint({
    method: 'get',
    path: '/systems/:systemId/tape',
    who: 'viewer',
    summary: "The site's day as planned and as delivered: what the drop tape shows",
    query: z.object({ from: rangeTimeSchema.optional(), to: rangeTimeSchema.optional() }),
    answer: tapeSchema,
  }),
  getDoses: endpoint({
    method: 'get',
    path: '/systems/:systemId/doses',
    who: 'viewer',
    summary: 'Carbon given over a range, in buckets of whole multiples of 15 minutes, with the planned dose as steps',
    query: rangeQuerySchema.and(z.object({ points: z.coerce.number().int().min(1).max(5000).default(400) })),
    answer: doseColumnsSchema,
  }),
};
