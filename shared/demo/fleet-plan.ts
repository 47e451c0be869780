import { z } from 'zod';
import { schedulePayloadSchema } from '../mqtt/payloads.ts';

const atMsSchema = z.number().int();
const credentialsSchema = z.object({ deviceId: z.string().min(1), password: z.string().min(1) });

/** Something that was done to the water, which its probes show. */
export const fleetEventSchema = z.discriminatedUnion('kind', [
  z.object({ kind: z.literal('water-change'), atMs: atMsSchema, share: z.number().min(0).max(1) }),
  z.object({ kind: z.literal('refill'), atMs: atMsSchema, ml: z.number().positive() }),
  z.object({ kind: z.literal('carbon'), atMs: atMsSchema, ml: z.number().positive() }),
]);

export const fleetSystemSchema = z.object({
  name: z.string(),
  seed: z.number().int(),
  netLitres: z.number().positive(),
  temperatureC: z.number(),
  nitrateMgPerL: z.number(),
  phosphateMgPerL: z.number(),
  carbonMgPerMl: z.number(),
  bottleMl: z.number(),
  events: z.array(fleetEventSchema),
  pump: credentialsSchema
    .extend({
      heads: z.array(z.number().int()),
      mlPerSecond: z.number().positive(),
      /** What the pump was told and from when on, oldest first; the last is what is published now. */
      schedules: z.array(z.object({ fromMs: atMsSchema, payload: schedulePayloadSchema })),
    })
    .nullable(),
  probe: credentialsSchema.extend({ channels: z.array(z.string()) }).nullable(),
});
export type FleetSystem = z.infer<typeof fleetSystemSchema>;

/** What the demo's device process is told: whose devices it plays, and the past that they have to tell. Holds their passwords. */
export const fleetPlanSchema = z.object({
  mqttUrl: z.string(),
  /** The broker is on this machine and may show a certificate that nobody signed. */
  trustAnyCertificate: z.boolean(),
  stateFolder: z.string(),
  /** The past that is told at the first start: samples each 5 minutes from here on... */
  historyFromMs: atMsSchema,
  /** ...and each 10 seconds from here on. */
  fineFromMs: atMsSchema,
  systems: z.array(fleetSystemSchema),
});
export type FleetPlan = z.infer<typeof fleetPlanSchema>;

/** The line that the device process prints when the past is told and everything is live. */
export const FLEET_READY_LINE = 'ready';
