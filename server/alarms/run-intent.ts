import { z } from 'zod';
import type { RunIntent } from '#shared/domain/run-too-long.ts';
import { type ScheduleHead, schedulePayloadSchema } from '#shared/mqtt/payloads.ts';
import { query } from '../db/open.ts';
import type { Row } from '../db/schema.ts';
import type { Transaction } from '../db/writer.ts';

const bodySchema = z.string().transform((text) => schedulePayloadSchema.parse(JSON.parse(text)));
const doseArgsSchema = z.string().transform((text) => z.object({ ml: z.number().positive() }).safeParse(JSON.parse(text)));

/** What a run was to give and how fast, by the schedule that it names (else the one in force when it began) and by its order. */
export function runIntent(tx: Transaction, run: Row<'run'>): RunIntent {
  const planned = scheduleHeadOf(tx, run);
  const slotMl = run.cause === 'schedule' ? positive(planned?.slotMl) : null;
  return {
    setMl: slotMl ?? orderedMl(tx, run),
    maxMlPerRun: positive(planned?.maxMlPerRun),
    mlPerSecond: planned?.mlPerSecond ?? assignedMlPerSecond(tx, run),
  };
}

const positive = (value: number | undefined) => (value !== undefined && value > 0 ? value : null);

function scheduleHeadOf(tx: Transaction, run: Row<'run'>): ScheduleHead | undefined {
  const published = query.selectFrom('scheduleVersion').select('body').where('deviceId', '=', run.deviceId);
  const named = run.scheduleVersion === null ? undefined : tx.first(published.where('version', '=', run.scheduleVersion));
  const row = named ?? tx.first(published.where('fromMs', '<=', run.begunMs).orderBy('fromMs', 'desc').orderBy('version', 'desc').limit(1));
  return row === undefined ? undefined : bodySchema.parse(row.body).heads.find((head) => head.head === run.head);
}

function orderedMl(tx: Transaction, run: Row<'run'>): number | null {
  if (run.orderId === null) return null;
  const order = tx.first(
    query.selectFrom('deviceOrder').select(['do', 'args']).where('id', '=', run.orderId).where('deviceId', '=', run.deviceId),
  );
  if (order?.do !== 'dose') return null;
  const args = doseArgsSchema.parse(order.args);
  return args.success ? args.data.ml : null;
}

function assignedMlPerSecond(tx: Transaction, run: Row<'run'>): number | null {
  if (run.headId === null) return null;
  const assignment = tx.first(
    query
      .selectFrom('headAssignment')
      .select('mlPerSecond')
      .where('headId', '=', run.headId)
      .where('fromMs', '<=', run.begunMs)
      .orderBy('fromMs', 'desc')
      .limit(1),
  );
  return assignment?.mlPerSecond ?? null;
}
