import type { ExtraDose, Tape } from '#shared/contract/telemetry.ts';
import { dropTape, type TapePump, type TapeRun, type TapeStop } from '#shared/domain/drop-tape.ts';
import { schedulePayloadSchema } from '#shared/mqtt/payloads.ts';
import type { Reader } from '../db/open.ts';
import { readPlannedVolume } from './planned-volume.ts';

export interface TapeRange {
  systemId: string;
  /** Inclusive. */
  fromMs: number;
  /** Exclusive. */
  toMs: number;
  nowMs: number;
}

const DAY_MS = 86_400_000;

/**
 * A run belongs to a slot within a minute of it: slots and runs beyond both ends of the range are matched too, so that
 * none at an end takes what belongs to its neighbour.
 */
const MARGIN_MS = 120_000;

async function readRuns(reader: Reader, { systemId, fromMs, toMs }: TapeRange): Promise<TapeRun[]> {
  const rows = await reader
    .selectFrom('run')
    .select(['run as id', 'deviceId', 'head', 'begunMs as beganMs', 'endedMs', 'ml', 'cause', 'dueMs'])
    .where('systemId', '=', systemId)
    .where('kind', '=', 'carbon')
    // The day before too: what the pump's own ceilings count.
    .where('begunMs', '>', fromMs - DAY_MS)
    .where('begunMs', '<', toMs + MARGIN_MS)
    .orderBy('begunMs')
    .execute();
  return rows;
}

/** Stops with whether the pump has proved them: by its word, or by the version of the schedule that it says it runs. */
async function readStops(reader: Reader, { systemId, fromMs, toMs }: TapeRange): Promise<TapeStop[]> {
  const rows = await reader
    .selectFrom('headStop as stop')
    .leftJoin('deviceState as state', 'state.deviceId', 'stop.deviceId')
    .leftJoin('scheduleVersion as running', (join) =>
      join
        .onRef('running.deviceId', '=', 'stop.deviceId')
        .onRef('running.version', '=', 'state.scheduleVersion')
        // One from before has the head off for an earlier stop, which the pump may have left behind since.
        .onRef('running.fromMs', '>=', 'stop.stoppedAtMs'),
    )
    .select([
      'stop.deviceId',
      'stop.head',
      'stop.cause',
      'stop.stoppedAtMs as stoppedMs',
      'stop.resumedAtMs as resumedMs',
      'stop.confirmedAtMs',
      'running.body',
    ])
    .where('stop.systemId', '=', systemId)
    .where('stop.stoppedAtMs', '<', toMs + MARGIN_MS)
    .where((where) => where.or([where('stop.resumedAtMs', 'is', null), where('stop.resumedAtMs', '>=', fromMs)]))
    .execute();
  return rows.map(({ confirmedAtMs, body, ...stop }) => ({
    ...stop,
    isProved: confirmedAtMs !== null || (body !== null && isOffIn(body, stop.head)),
  }));
}

function isOffIn(body: string, head: number): boolean {
  const { heads } = schedulePayloadSchema.parse(JSON.parse(body));
  return heads.every((one) => one.head !== head || !one.enabled);
}

async function readPumps(reader: Reader, deviceIds: string[]): Promise<TapePump[]> {
  if (deviceIds.length === 0) return [];
  const rows = await reader
    .selectFrom('deviceState')
    .select(['deviceId', 'online', 'heardAtMs as heardMs', 'changedAtMs as changedMs'])
    .where('deviceId', 'in', deviceIds)
    .execute();
  return rows.map(({ online, ...row }) => ({ ...row, isOnline: online === 1 }));
}

const readHandDoses = (reader: Reader, { systemId, fromMs, toMs }: TapeRange) =>
  reader
    .selectFrom('handDose')
    .select(['id', 'atMs', 'ml'])
    .where('systemId', '=', systemId)
    .where('atMs', '>=', fromMs)
    .where('atMs', '<', toMs)
    .orderBy('atMs')
    .execute();

async function readGivenMl(reader: Reader, { systemId, fromMs, toMs }: TapeRange): Promise<number> {
  const row = await reader
    .selectFrom('doseLedger')
    .select((select) => select.fn.sum<number | null>('deltaMl').as('ml'))
    .where('systemId', '=', systemId)
    .where('kind', '=', 'carbon')
    .where('atMs', '>=', fromMs)
    .where('atMs', '<', toMs)
    .executeTakeFirst();
  return row?.ml ?? 0;
}

/** What was planned for a system over a range, what came of it, and what was given besides. */
export async function readTape(reader: Reader, range: TapeRange): Promise<Tape> {
  const { systemId, fromMs, toMs, nowMs } = range;
  const planned = await readPlannedVolume(reader, systemId, fromMs - MARGIN_MS, toMs + MARGIN_MS);
  const scheduled = planned.scheduledSlots(fromMs - MARGIN_MS, toMs + MARGIN_MS);
  // Plans are asked for in windows open at their start; the range holds a slot due at its very start.
  const plannedMl = (untilMs: number) => planned.plannedMl(fromMs - 1, untilMs);
  const deviceIds = [...new Set(scheduled.map((slot) => slot.deviceId))];
  const [runs, stops, pumps, handDoses, givenMl] = await Promise.all([
    readRuns(reader, range),
    readStops(reader, range),
    readPumps(reader, deviceIds),
    readHandDoses(reader, range),
    readGivenMl(reader, range),
  ]);

  const tape = dropTape({ slots: scheduled, runs, stops, pumps, nowMs });
  const isInRange = (atMs: number) => atMs >= fromMs && atMs < toMs;
  const extras: ExtraDose[] = [
    ...handDoses.map((dose) => ({ kind: 'hand' as const, t: dose.atMs, ml: dose.ml, deviceId: null, head: null, sourceId: dose.id })),
    ...tape.unplanned
      .filter((run) => isInRange(run.beganMs))
      .map(({ beganMs, ml, deviceId, head, id }) => ({ kind: 'unplanned' as const, t: beganMs, ml, deviceId, head, sourceId: id })),
  ];
  return {
    fromT: fromMs,
    toT: toMs,
    nowT: nowMs,
    slots: tape.slots
      .filter(({ slot }) => isInRange(slot.dueMs))
      .map(({ slot, mark, run }) => ({
        headId: slot.headId,
        deviceId: slot.deviceId,
        head: slot.head,
        dueT: slot.dueMs,
        ml: slot.ml,
        mark,
        deliveredMl: run?.ml ?? 0,
        runId: run?.id ?? null,
      })),
    extras: extras.sort((one, other) => one.t - other.t),
    givenMl,
    plannedMl: plannedMl(toMs - 1),
    plannedSoFarMl: plannedMl(Math.min(nowMs, toMs - 1)),
  };
}
