import type { PlannedWindow } from '#shared/domain/volume-limits.ts';
import { countedAtMs, type VolumeAt, volumeTimeline } from '#shared/domain/rolling-volume.ts';
import { query } from '../db/open.ts';
import type { Row } from '../db/schema.ts';
import type { Transaction } from '../db/writer.ts';
import { plannedVolumeIn, type SystemSlot } from '../doses/planned-volume.ts';
import { runSourceId } from '../doses/run-source-id.ts';
import { carbonCeilingMlPerDay } from './carbon-ceiling.ts';

const runColumns = ['deviceId', 'run', 'head', 'cause', 'dueMs', 'begunMs'] as const;
const ledgerColumns = ['seq', 'sourceKind', 'sourceId', 'atMs', 'deltaMl'] as const;

type LedgerRow = Row<'doseLedger'>;
type RunFacts = Pick<Row<'run'>, (typeof runColumns)[number]>;

/** One ledger entry of carbon at the time at which it counts. */
export interface CarbonEntry extends VolumeAt {
  seq: number;
  sourceKind: LedgerRow['sourceKind'];
  sourceId: string;
  run: RunFacts | null;
  /** The run began while its head was to be kept stopped. */
  onStoppedHead: boolean;
}

export interface CarbonWindow extends PlannedWindow {
  givenMl: number;
  pumpedMl: number;
  /** Given by runs that began on a stopped head. */
  stoppedMl: number;
}

/** The carbon given to one system and planned for it over a stretch of time. */
export interface CarbonRecord {
  entries: readonly CarbonEntry[];
  /** Times at which something counts or was planned. */
  instantsMs: readonly number[];
  window(endMs: number, windowMs: number): CarbonWindow;
  plannedSlots(fromMs: number, toMs: number): SystemSlot[];
}

/** A run's steps may be dated apart from the time at which they count; more than any run lasts. */
const SLACK_MS = 3_600_000;

/** Loads what counts in (`fromMs`, `toMs`]; ask only within that. */
export function loadCarbonRecord(tx: Transaction, systemId: string, fromMs: number, toMs: number): CarbonRecord {
  const entries = loadEntries(tx, systemId, fromMs - SLACK_MS, toMs + SLACK_MS).filter(
    (entry) => entry.atMs > fromMs && entry.atMs <= toMs,
  );
  const planned = plannedVolumeIn(tx, systemId, fromMs, toMs);
  const slots = planned.plannedSlots(fromMs, toMs);
  const ceilingMlPerDay = carbonCeilingMlPerDay(tx, systemId);

  const given = volumeTimeline(entries);
  const pumped = volumeTimeline(entries.filter((entry) => entry.sourceKind === 'run'));
  const stopped = volumeTimeline(entries.filter((entry) => entry.onStoppedHead));
  const plan = volumeTimeline(slots.map((slot) => ({ atMs: slot.dueMs, ml: slot.ml })));

  return {
    entries,
    instantsMs: [...given.instantsMs, ...plan.instantsMs],
    window(endMs, windowMs) {
      const beginMs = endMs - windowMs;
      return {
        givenMl: given.sumMl(beginMs, endMs),
        pumpedMl: pumped.sumMl(beginMs, endMs),
        stoppedMl: stopped.sumMl(beginMs, endMs),
        plannedMl: plan.sumMl(beginMs, endMs),
        largestSlotMl: planned.isScheduled(beginMs, endMs) ? planned.largestSlotMl(beginMs, endMs) : null,
        ceilingMlPerDay,
      };
    },
    plannedSlots: planned.plannedSlots,
  };
}

function loadEntries(tx: Transaction, systemId: string, fromMs: number, toMs: number): CarbonEntry[] {
  const ledger = tx.all(
    query
      .selectFrom('doseLedger')
      .select(ledgerColumns)
      .where('systemId', '=', systemId)
      .where('kind', '=', 'carbon')
      .where('atMs', '>', fromMs)
      .where('atMs', '<=', toMs)
      .orderBy('atMs'),
  );
  if (ledger.length === 0) return [];
  const runs = loadRuns(tx, systemId, fromMs - SLACK_MS, toMs);
  const stops = tx.all(query.selectFrom('headStop').selectAll().where('systemId', '=', systemId).where('stoppedAtMs', '<=', toMs));

  return ledger.map((row) => {
    const run = row.sourceKind === 'run' ? (runs.get(row.sourceId) ?? null) : null;
    const dueMs = run?.cause === 'schedule' ? run.dueMs : null;
    return {
      seq: row.seq,
      sourceKind: row.sourceKind,
      sourceId: row.sourceId,
      run,
      ml: row.deltaMl,
      atMs: countedAtMs({ atMs: row.atMs, begunMs: run?.begunMs ?? row.atMs, dueMs }),
      onStoppedHead: run !== null && stops.some((stop) => keptStopped(stop, run)),
    };
  });
}

function loadRuns(tx: Transaction, systemId: string, fromMs: number, toMs: number): Map<string, RunFacts> {
  const rows = tx.all(
    query.selectFrom('run').select(runColumns).where('systemId', '=', systemId).where('begunMs', '>', fromMs).where('begunMs', '<=', toMs),
  );
  return new Map(rows.map((row) => [runSourceId(row.deviceId, row.run), row]));
}

function keptStopped(stop: Row<'headStop'>, run: RunFacts): boolean {
  return (
    stop.deviceId === run.deviceId &&
    stop.head === run.head &&
    stop.stoppedAtMs <= run.begunMs &&
    (stop.resumedAtMs === null || run.begunMs < stop.resumedAtMs)
  );
}
