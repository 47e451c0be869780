import { z } from 'zod';

/** Times in our own JSON are UTC milliseconds since 1970. A fraction is rounded: no dose is refused for its clock. */
const atMsSchema = z.number().transform(Math.round);
const headNumberSchema = z.number().int().min(1).max(16);
const volumeMlSchema = z.number().min(0).max(100_000);

/** One under this is an unset clock, or seconds sent by mistake. */
export const UNSET_CLOCK_BELOW_MS = 1e11;

export const runPayloadSchema = z.object({
  run: z.string().min(1).max(80),
  head: headNumberSchema,
  phase: z.enum(['begun', 'running', 'ended']),
  atMs: atMsSchema,
  ml: volumeMlSchema,
  cause: z.enum(['schedule', 'order', 'button', 'prime', 'calibration']),
  scheduleVersion: z.number().int().optional(),
  dueMs: atMsSchema.optional(),
  order: z.string().max(80).optional(),
  odometerMl: z.number().min(0).optional(),
  odometerEpoch: z.number().int().min(0).optional(),
  begunMs: atMsSchema.optional(),
  onMs: z.number().min(0).optional(),
  interrupted: z.boolean().optional(),
});
export type RunPayload = z.infer<typeof runPayloadSchema>;

export const statePayloadSchema = z.object({
  online: z.boolean(),
  atMs: atMsSchema.optional(),
  scheduleVersion: z.number().int().nullable().optional(),
  heads: z
    .array(
      z.object({
        head: headNumberSchema,
        state: z.enum(['idle', 'dosing', 'stopped']),
        odometerMl: z.number().min(0).optional(),
        odometerEpoch: z.number().int().min(0).optional(),
      }),
    )
    .max(16)
    .optional(),
});
export type StatePayload = z.infer<typeof statePayloadSchema>;

export const receiptPayloadSchema = z.object({
  order: z.string().min(1).max(80),
  atMs: atMsSchema,
  outcome: z.enum(['done', 'refused', 'expired']),
  why: z.string().max(200).optional(),
});
export type ReceiptPayload = z.infer<typeof receiptPayloadSchema>;

export const scheduleHeadSchema = z.object({
  head: headNumberSchema,
  enabled: z.boolean(),
  slotMl: volumeMlSchema,
  /** Minutes of the UTC day, ascending, unique. */
  slotsUtcMin: z.array(z.number().int().min(0).max(1439)).max(96),
  mlPerSecond: z.number().positive(),
  maxMlPerRun: volumeMlSchema,
  maxMlPerHour: volumeMlSchema,
  maxMlPerDay: volumeMlSchema,
});
export type ScheduleHead = z.infer<typeof scheduleHeadSchema>;

export const schedulePayloadSchema = z.object({ version: z.number().int().positive(), heads: z.array(scheduleHeadSchema).max(16) });
export type SchedulePayload = z.infer<typeof schedulePayloadSchema>;

export const orderPayloadSchema = z.object({
  id: z.string().min(1).max(80),
  expiresAtMs: atMsSchema.nullable(),
  head: headNumberSchema,
  do: z.enum(['stop', 'resume', 'dose', 'prime']),
  ml: volumeMlSchema.optional(),
  seconds: z.number().positive().max(600).optional(),
});
export type OrderPayload = z.infer<typeof orderPayloadSchema>;
