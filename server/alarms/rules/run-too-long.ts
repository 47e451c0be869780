import { OPEN_WINDOW_MS } from '#shared/domain/rolling-volume.ts';
import { runBounds, runExcess, type RunExcess } from '#shared/domain/run-too-long.ts';
import { query } from '../../db/open.ts';
import type { Row } from '../../db/schema.ts';
import type { Transaction } from '../../db/writer.ts';
import { runSourceId } from '../../doses/run-source-id.ts';
import type { AlarmRuleModule, Finding, RuleContext } from '../finding.ts';
import { runIntent } from '../run-intent.ts';

type RunRow = Row<'run'>;

/** No run that has ended lasted longer, so that a look back need not read a whole history. */
const LONGEST_RUN_MS = 86_400_000;

/** A run has not ended when it should have, or has given far more than it was to give. */
export const runTooLong: AlarmRuleModule = {
  code: 'run-too-long',
  windowMs: OPEN_WINDOW_MS,
  evaluate(context) {
    const { tx, systemId, openFromMs } = context;
    const ofSystem = query.selectFrom('run').selectAll().where('systemId', '=', systemId);
    const open = tx.all(ofSystem.where('endedMs', 'is', null));
    const ended = tx.all(ofSystem.where('begunMs', '>', openFromMs - LONGEST_RUN_MS).where('endedMs', '>', openFromMs));
    const runs = [...open, ...ended].sort((a, b) => a.begunMs - b.begunMs);
    const byTarget = new Map<string, Finding>();
    for (const run of runs) {
      const overMs = overAtMs(tx, run);
      if (overMs !== null && overMs <= openFromMs) continue;
      const finding = findingOf(context, run, overMs !== null);
      // Of several runs of a head the newest tells: it is the one that may still be delivering.
      if (finding !== null) byTarget.set(finding.target, finding);
    }
    return [...byTarget.values()];
  },
  evaluateClosed(context, late) {
    const runs = context.tx.all(
      query
        .selectFrom('run')
        .selectAll()
        .where('systemId', '=', context.systemId)
        .where('begunMs', '>', Math.min(...late.instantsMs) - LONGEST_RUN_MS)
        .where('begunMs', '<=', Math.max(...late.instantsMs))
        .where('endedMs', '<=', context.nowMs - OPEN_WINDOW_MS),
    );
    return runs
      .filter((run) => late.sources.has(`run:${runSourceId(run.deviceId, run.run)}`))
      .flatMap((run) => {
        const finding = findingOf(context, run, true);
        return finding === null ? [] : [{ finding, atMs: run.endedMs ?? run.begunMs }];
      });
  },
};

/** When the run was over: it ended, or its head began another one, which proves that this one had; null while it goes on. */
function overAtMs(tx: Transaction, run: RunRow): number | null {
  if (run.endedMs !== null) return run.endedMs;
  const next = tx.first(
    query
      .selectFrom('run')
      .select('begunMs')
      .where('deviceId', '=', run.deviceId)
      .where('systemId', '=', run.systemId)
      .where('head', '=', run.head)
      .where('begunMs', '>', run.begunMs)
      .orderBy('begunMs')
      .limit(1),
  );
  return next?.begunMs ?? null;
}

function findingOf(context: RuleContext, run: RunRow, isOver: boolean): Finding | null {
  const { tx, nowMs, watch } = context;
  const bounds = runBounds(runIntent(tx, run));
  const begunArrivedMs = run.begunReceivedMs ?? run.begunMs;
  const excess = runExcess(
    { begunArrivedMs, pumpBackMs: pumpBackMs(context, run, begunArrivedMs), serverBackMs: watch.backMs, ended: isOver, ml: run.ml },
    bounds,
    nowMs,
  );
  if (excess === null) return null;
  return {
    target: run.headId === null ? `device:${run.deviceId}/${run.head}` : `head:${run.headId}`,
    limitKind: 'hard',
    excess: Infinity,
    value: excess.value,
    limit: excess.limit,
    unit: excess.unit,
    trip: { key: runSourceId(run.deviceId, run.run), ledgerSeq: newestSeq(tx, run) },
    headConcerned: { deviceId: run.deviceId, head: run.head },
    evidence: () => evidenceOf(run, excess, bounds, isOver),
  };
}

/**
 * Since when the pump has been there; null while it is away. After the server was away in between, since it was heard
 * again: what it could not report meanwhile, such as the end of the run, comes right after its first words.
 */
function pumpBackMs({ tx, watch }: RuleContext, run: RunRow, begunArrivedMs: number): number | null {
  const state = tx.first(
    query.selectFrom('deviceState').select(['online', 'heardAtMs', 'changedAtMs']).where('deviceId', '=', run.deviceId),
  );
  if (state === undefined) return begunArrivedMs;
  if (state.online === 0) return null;
  if (begunArrivedMs >= watch.backMs) return state.changedAtMs;
  return state.heardAtMs < watch.backMs ? null : Math.max(state.changedAtMs, watch.heardAgainMs(run.deviceId));
}

function newestSeq(tx: Transaction, run: RunRow): number {
  const newest = tx.first(
    query
      .selectFrom('doseLedger')
      .select((select) => select.fn.max('seq').as('seq'))
      .where('sourceKind', '=', 'run')
      .where('sourceId', '=', runSourceId(run.deviceId, run.run))
      .where('deltaMl', '>', 0),
  );
  return newest?.seq ?? 0;
}

function evidenceOf(run: RunRow, excess: RunExcess, bounds: ReturnType<typeof runBounds>, isOver: boolean): Record<string, unknown> {
  const iso = (ms: number | null) => (ms === null ? null : new Date(ms).toISOString());
  return {
    by: excess.by,
    run: run.run,
    deviceId: run.deviceId,
    head: run.head,
    headRegistered: run.headId !== null,
    cause: run.cause,
    begunAt: iso(run.begunMs),
    begunArrivedAt: iso(run.begunReceivedMs),
    dueAt: iso(run.dueMs),
    endedAt: iso(run.endedMs),
    isOver,
    givenMl: run.ml,
    mostMl: bounds.mostMl,
    expectedSeconds: bounds.expectedMs / 1000,
    longestSeconds: bounds.longestMs / 1000,
    scheduleVersion: run.scheduleVersion,
  };
}
