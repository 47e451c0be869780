import type { z } from 'zod';
import {
  receiptPayloadSchema,
  type ReceiptPayload,
  runPayloadSchema,
  type RunPayload,
  statePayloadSchema,
  type StatePayload,
} from '#shared/mqtt/payloads.ts';
import { type DecodedSenml, decodeSenml } from './decode-senml.ts';
import type { IncomingMessage } from './ingest-port.ts';
import { Refusal } from './refusal.ts';

export const MAX_PAYLOAD_BYTES = 65_536;

export type DecodedMessage =
  | { word: 'senml'; senml: DecodedSenml }
  | { word: 'run'; run: RunPayload }
  | { word: 'state'; state: StatePayload }
  | { word: 'receipt'; receipt: ReceiptPayload };

function parseJson(payload: Buffer): unknown {
  if (payload.length > MAX_PAYLOAD_BYTES) throw new Refusal('too-big');
  try {
    return JSON.parse(payload.toString('utf8'));
  } catch (error) {
    if (error instanceof SyntaxError) throw new Refusal('not-json');
    throw error;
  }
}

/** Many a JSON library writes an absent field as null, and a pump without a clock has no time to give. */
function withoutNulls(json: unknown): unknown {
  if (typeof json !== 'object' || json === null || Array.isArray(json)) return json;
  return Object.fromEntries(Object.entries(json).filter(([, value]) => value !== null));
}

function check<Schema extends z.ZodType>(schema: Schema, json: unknown): z.output<Schema> {
  const parsed = schema.safeParse(json);
  if (parsed.success) return parsed.data;
  const isInfinite = parsed.error.issues.some((issue) => {
    const value = issue.path.reduce<unknown>((within, key) => (within as Record<PropertyKey, unknown>)[key], json);
    return typeof value === 'number' && !Number.isFinite(value);
  });
  throw new Refusal(isInfinite ? 'not-finite' : 'wrong-shape');
}

/** A missing time is an unset clock: no delivery is refused for it. */
function timed(json: unknown): unknown {
  const present = withoutNulls(json);
  return typeof present === 'object' && present !== null && !Array.isArray(present) ? { atMs: 0, ...present } : present;
}

/** @throws {Refusal} when the message does not fit. */
export function decodeMessage({ word, payload, deviceId, receivedMs }: IncomingMessage): DecodedMessage {
  const json = parseJson(payload);
  switch (word) {
    case 'senml':
      return { word, senml: decodeSenml(json, deviceId, receivedMs) };
    case 'run':
      return { word, run: check(runPayloadSchema, timed(json)) };
    case 'state':
      return { word, state: check(statePayloadSchema, withoutNulls(json)) };
    case 'receipt':
      return { word, receipt: check(receiptPayloadSchema, timed(json)) };
  }
}
