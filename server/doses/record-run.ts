import { countedAtMs } from '#shared/domain/rolling-volume.ts';
import { type RunPayload, UNSET_CLOCK_BELOW_MS } from '#shared/mqtt/payloads.ts';
import { markDirty, recordChange } from '../changes/record-change.ts';
import { query } from '../db/open.ts';
import type { Row } from '../db/schema.ts';
import type { Transaction } from '../db/writer.ts';
import { deviceStateRow } from '../ingest/device-presence.ts';
import type { MessageDevice } from '../ingest/ingest-port.ts';
import { LATEST_MS } from '../ingest/plausible-time.ts';
import { flagsOf, presentRun } from '../telemetry/present-run.ts';
import { type HeadUse, headUseAt } from './head-use.ts';
import { addRunToLedger } from './run-ledger.ts';
import { type RunTimes, runTimes } from './run-clock.ts';

type RunRow = Row<'run'>;

/** What began longer ago is history that is being uploaded, and no news for a browser. */
const NEWS_MS = 48 * 3_600_000;

function dueMsOf({ cause, dueMs }: RunPayload): number | null {
  if (cause !== 'schedule' || dueMs === undefined) return null;
  return dueMs >= UNSET_CLOCK_BELOW_MS && dueMs < LATEST_MS ? dueMs : null;
}

/** The row after this step. Steps come in any order and repeat, so each only adds what it knows. */
function merge(
  before: RunRow | undefined,
  device: MessageDevice,
  payload: RunPayload,
  times: RunTimes,
  use: HeadUse,
  receivedMs: number,
): RunRow {
  const flags = new Set<string>([...(before === undefined ? [] : flagsOf(before)), ...times.flags]);
  if (before !== undefined && (before.head !== payload.head || before.cause !== payload.cause)) flags.add('steps-differ');
  const dueMs = before?.dueMs ?? dueMsOf(payload);
  if (payload.cause === 'schedule' && payload.dueMs !== undefined && dueMs === null) flags.add('due-off');

  let endedPayload = before?.endedPayload ?? null;
  let endedMs = before?.endedMs ?? null;
  let interrupted = before?.interrupted ?? 0;
  if (payload.phase === 'ended') {
    const text = JSON.stringify(payload);
    if (endedPayload === null) {
      endedPayload = text;
      endedMs = times.stepMs;
      interrupted = payload.interrupted === true ? 1 : 0;
    } else if (endedPayload !== text) flags.add('second-ended');
  }
  const begunMs = Math.min(before?.begunMs ?? times.begunMs, times.begunMs);
  const isFarthest = payload.ml >= (before?.ml ?? 0);
  return {
    deviceId: device.id,
    run: payload.run,
    siteId: device.siteId,
    systemId: use.systemId,
    headId: use.headId,
    head: before?.head ?? payload.head,
    kind: use.kind,
    productRevisionId: use.productRevisionId,
    cause: before?.cause ?? payload.cause,
    orderId: before?.orderId ?? (payload.cause === 'order' ? (payload.order ?? null) : null),
    scheduleVersion: before?.scheduleVersion ?? payload.scheduleVersion ?? null,
    dueMs,
    begunMs,
    begunReceivedMs: before?.begunReceivedMs ?? (payload.phase === 'begun' ? receivedMs : null),
    endedMs: endedMs === null ? null : Math.max(endedMs, begunMs),
    ml: Math.max(before?.ml ?? 0, payload.ml),
    // No motor ran for longer than time goes: a number that no column holds must not cost the dose.
    onMs: payload.onMs === undefined ? (before?.onMs ?? null) : Math.max(before?.onMs ?? 0, Math.min(Math.round(payload.onMs), LATEST_MS)),
    odometerMl: (isFarthest ? payload.odometerMl : undefined) ?? before?.odometerMl ?? payload.odometerMl ?? null,
    odometerEpoch: (isFarthest ? payload.odometerEpoch : undefined) ?? before?.odometerEpoch ?? payload.odometerEpoch ?? null,
    interrupted,
    endedPayload,
    flags: JSON.stringify([...flags].sort()),
    receivedMs: before?.receivedMs ?? receivedMs,
  };
}

const isSame = (one: RunRow, other: RunRow) => JSON.stringify(Object.entries(one).sort()) === JSON.stringify(Object.entries(other).sort());

/**
 * Records one step of a run with its key (device, run), and in the ledger what is new of its volume, within the unit.
 * @returns the run as it stands, and whether the step changed it: a repeated step is nothing.
 */
export function recordRun(
  tx: Transaction,
  device: MessageDevice,
  payload: RunPayload,
  receivedMs: number,
  nowMs: number,
): { run: RunRow; isChanged: boolean } {
  const state = deviceStateRow(tx, device.id);
  const times = runTimes(payload, receivedMs, { offsetMs: state?.clockOffsetMs ?? null, isUnset: state?.clockUnset === 1 });
  const before = tx.first(query.selectFrom('run').selectAll().where('deviceId', '=', device.id).where('run', '=', payload.run));
  const begunMs = Math.min(before?.begunMs ?? times.begunMs, times.begunMs);
  const use = headUseAt(tx, device, before?.head ?? payload.head, begunMs);

  const run = merge(before, device, payload, times, use, receivedMs);
  const atMs = countedAtMs({ atMs: times.stepMs, begunMs: run.begunMs, dueMs: run.dueMs });
  if (run.dueMs !== null && atMs !== run.dueMs) run.flags = JSON.stringify([...new Set([...flagsOf(run), 'due-off'])].sort());
  if (before !== undefined && isSame(before, run)) return { run, isChanged: false };

  const { deviceId: _deviceId, run: _run, ...values } = run;
  tx.run(
    query
      .insertInto('run')
      .values(run)
      .onConflict((conflict) => conflict.columns(['deviceId', 'run']).doUpdateSet(values)),
  );
  addRunToLedger(tx, { siteId: run.siteId, deviceId: device.id, run: run.run, use, ml: run.ml, atMs, receivedMs });
  for (const systemId of new Set([run.systemId, before?.systemId ?? run.systemId])) markDirty(tx, systemId, nowMs);
  if (run.begunMs > nowMs - NEWS_MS) recordChange(tx, { systemId: run.systemId, type: 'run', atMs: nowMs, data: presentRun(run) });
  return { run, isChanged: true };
}
