import { z } from 'zod';
import type { Run } from '#shared/contract/telemetry.ts';
import { isoOf, isoOrNull } from '#shared/time/iso-of.ts';
import type { Row } from '../db/schema.ts';

const flagsSchema = z.array(z.string());

export function flagsOf(row: { flags: string }): string[] {
  return flagsSchema.parse(JSON.parse(row.flags));
}

/** A run in its REST shape. */
export function presentRun(row: Row<'run'>): Run {
  return {
    id: row.run,
    deviceId: row.deviceId,
    headId: row.headId,
    head: row.head,
    kind: row.kind,
    beganAt: isoOf(row.begunMs),
    endedAt: isoOrNull(row.endedMs),
    ml: row.ml,
    cause: row.cause,
    dueAt: isoOrNull(row.dueMs),
    interrupted: row.interrupted === 1,
    flags: flagsOf(row),
  };
}
