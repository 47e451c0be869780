import { z } from 'zod';
import { alarmCodes } from '../domain/alarm-codes.ts';
import { alarmStates } from '../domain/alarm-life-cycle.ts';
import { endpoint } from './endpoint.ts';
import { idSchema, pageOf, pageQuerySchema, shortListQuerySchema, timestampSchema } from './fields.ts';
import { prioritySchema } from './systems.ts';

export const alarmCodeSchema = z.enum(alarmCodes);

/** States in the words of ISA-18.2, with `latched` for an interlock whose cause is gone but which nobody reset. */
export const alarmStateSchema = z.enum(alarmStates);

export const alarmSchema = z.object({
  id: idSchema,
  code: alarmCodeSchema,
  siteId: idSchema,
  systemId: idSchema,
  target: z.string(),
  limitKind: z.enum(['soft', 'hard']),
  priority: prioritySchema,
  state: alarmStateSchema,
  active: z.boolean(),
  acknowledged: z.boolean(),
  latched: z.boolean(),
  shelvedUntil: timestampSchema.nullable(),
  raisedAt: timestampSchema,
  returnedAt: timestampSchema.nullable(),
  value: z.number().nullable(),
  limit: z.number().nullable(),
  unit: z.string(),
  /** Facts by name that the alarm rests on, in the units that their names say. */
  evidence: z.record(z.string(), z.unknown()),
  taken: z.object({ userId: idSchema, name: z.string(), arriveAt: timestampSchema }).nullable(),
});
export type Alarm = z.infer<typeof alarmSchema>;

export const alarmTransitionSchema = z.object({
  seq: z.number().int(),
  at: timestampSchema,
  action: z.string(),
  stateBefore: alarmStateSchema,
  stateAfter: alarmStateSchema,
  actorKind: z.enum(['user', 'device', 'system']),
  actorName: z.string().nullable(),
  reason: z.string().nullable(),
});

/** Limits: `null` means from the schedule in force. */
export const alarmRuleBodySchema = z
  .strictObject({
    target: z.string().min(1).max(80).default('system'),
    enabled: z.boolean().default(true),
    priority: prioritySchema.optional(),
    soft: z.number().positive('A limit must be above 0').max(1_000_000).nullable().default(null),
    hard: z.number().positive('A limit must be above 0').max(1_000_000).nullable().default(null),
    unit: z.string().max(20).optional(),
    interlock: z.boolean().optional(),
    onDelaySeconds: z.number().min(0).max(86_400).optional(),
    offDelaySeconds: z.number().min(0).max(86_400).optional(),
    deadband: z.number().min(0).max(1_000_000).optional(),
  })
  .refine((rule) => rule.soft === null || rule.hard === null || rule.soft < rule.hard, {
    path: ['soft'],
    message: 'The soft limit must be under the hard limit',
  });

export const alarmRuleSchema = z.object({
  code: alarmCodeSchema,
  target: z.string(),
  enabled: z.boolean(),
  priority: prioritySchema,
  soft: z.number().nullable(),
  hard: z.number().nullable(),
  unit: z.string(),
  interlock: z.boolean(),
  onDelaySeconds: z.number(),
  offDelaySeconds: z.number(),
  deadband: z.number(),
  /** True while every value is the product's default. */
  isDefault: z.boolean(),
  /** The limits that hold now, with `null` resolved from the schedules in force; null where they cannot be told. */
  effectiveSoft: z.number().nullable(),
  effectiveHard: z.number().nullable(),
  /**
   * What the schedules planned in the current window, and the limits that follow from them, set by hand or not, in `unit`; null where
   * the rule counts nothing.
   */
  fromSchedule: z.object({ planned: z.number(), soft: z.number().nullable(), hard: z.number().nullable() }).nullable(),
  /** What has been counted in the current window, in `unit`; null where the rule counts nothing. */
  current: z.number().nullable(),
});
export type AlarmRule = z.infer<typeof alarmRuleSchema>;

const stateQuerySchema = pageQuerySchema.extend({ state: alarmStateSchema.optional() });

export const alarmEndpoints = {
  listAlarms: endpoint({
    method: 'get',
    path: '/alarms',
    who: 'signed-in',
    summary: "The alarms of all one's systems; all but `normal` when no state is asked for",
    query: stateQuerySchema,
    answer: pageOf(alarmSchema),
  }),
  listSystemAlarms: endpoint({
    method: 'get',
    path: '/systems/:systemId/alarms',
    who: 'viewer',
    summary: 'The alarms of a system; all but `normal` when no state is asked for',
    query: stateQuerySchema,
    answer: pageOf(alarmSchema),
  }),
  getAlarm: endpoint({
    method: 'get',
    path: '/alarms/:alarmId',
    who: 'viewer',
    summary: 'One alarm with its log',
    answer: z.object({ alarm: alarmSchema, transitions: z.array(alarmTransitionSchema) }),
  }),
  acknowledge: endpoint({
    method: 'post',
    status: 200,
    path: '/alarms/:alarmId/acknowledge',
    who: 'sitter',
    summary: 'Say that the alarm was seen',
    answer: alarmSchema,
  }),
  take: endpoint({
    method: 'post',
    status: 200,
    path: '/alarms/:alarmId/take',
    who: 'sitter',
    summary: '"I am on it", with the time of arrival',
    body: z.object({ arriveAt: timestampSchema }),
    answer: alarmSchema,
  }),
  shelve: endpoint({
    method: 'post',
    status: 200,
    path: '/alarms/:alarmId/shelve',
    who: 'keeper',
    summary: 'Keep an alarm quiet until a time, with a reason; an interlock for at most 8 h',
    body: z.object({ until: timestampSchema, reason: z.string().trim().min(3, 'Say why').max(500) }),
    answer: alarmSchema,
  }),
  reset: endpoint({
    method: 'post',
    status: 200,
    path: '/alarms/:alarmId/reset',
    who: 'keeper',
    summary: 'Release the latch of an interlock, with the cause found; starts nothing',
    body: z.object({ cause: z.string().trim().min(3, 'Say what the cause was').max(500) }),
    answer: alarmSchema,
  }),
  listRules: endpoint({
    method: 'get',
    path: '/systems/:systemId/alarm-rules',
    who: 'viewer',
    summary: 'The limits of a system, defaults included',
    query: shortListQuerySchema,
    answer: pageOf(alarmRuleSchema),
  }),
  putRule: endpoint({
    method: 'put',
    path: '/systems/:systemId/alarm-rules/:code',
    who: 'keeper',
    summary: 'Set a limit',
    body: alarmRuleBodySchema,
    answer: alarmRuleSchema,
  }),
};
