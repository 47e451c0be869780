import { z } from 'zod';
import { endpoint } from './endpoint.ts';
import { idSchema } from './fields.ts';
import { alarmSchema } from './alarms.ts';
import { deviceStateSchema } from './devices.ts';
import { eventSchema, testSchema } from './records.ts';
import { runSchema } from './telemetry.ts';

export const liveEndpoints = {
  createLiveTicket: endpoint({
    method: 'post',
    path: '/live/tickets',
    who: 'signed-in',
    summary: 'A ticket for the live stream of the systems named: good for 30 s, once',
    body: z.object({ systemIds: z.array(idSchema).min(1).max(500) }),
    answer: z.object({ ticket: z.string(), expiresIn: z.number().int() }),
  }),
};

/** Where the WebSocket is opened: `/api/live?ticket=&since=`. */
export const livePath = '/api/live';

const head = { seq: z.number().int(), systemId: idSchema };

/**
 * A frame of the live stream. `seq` rises over all systems, with holes for what others see. `gap` means that what came
 * between `since` and now is no longer kept: refetch. A test or event that was deleted comes with `deleted: true`.
 */
export const liveFrameSchema = z.discriminatedUnion('type', [
  z.object({ ...head, type: z.literal('samples'), data: z.object({ seriesId: idSchema, t: z.array(z.number()), v: z.array(z.number()) }) }),
  z.object({ ...head, type: z.literal('run'), data: runSchema }),
  z.object({ ...head, type: z.literal('state'), data: deviceStateSchema }),
  z.object({ ...head, type: z.literal('test'), data: testSchema.extend({ deleted: z.boolean().optional() }) }),
  z.object({ ...head, type: z.literal('event'), data: eventSchema.extend({ deleted: z.boolean().optional() }) }),
  z.object({ ...head, type: z.literal('alarm'), data: alarmSchema }),
  /** Schedules, stops, hand doses or volumes changed: refetch the system, its heads and its tape. */
  z.object({ ...head, type: z.literal('plan'), data: z.object({ reason: z.string() }) }),
  z.object({ ...head, type: z.literal('gap'), data: z.object({}) }),
]);
export type LiveFrame = z.infer<typeof liveFrameSchema>;

/** WebSocket close codes of the contract. */
export const liveCloseCodes = { signedOut: 4401, roleLost: 4403, tooSlow: 4408 } as const;
