import { uuidv7 } from 'uuidv7';
import { OPEN_WINDOW_MS } from '#shared/domain/rolling-volume.ts';
import { markDirty } from '../changes/record-change.ts';
import type { Core } from '../core.ts';
import { query } from '../db/open.ts';
import type { Transaction } from '../db/writer.ts';
import { evaluateSystem } from './evaluate-system.ts';
import { createLease } from './evaluator-lease.ts';
import type { AlarmRuleModule } from './finding.ts';
import { recordClosedWindows } from './record-closed-windows.ts';
import type { StopPort } from './stop-port.ts';

const TICK_MS = 1000;
/** A mark that waited longer tells of a clock that jumped, not of a restart. */
const LONGEST_WAIT_MS = 7 * 86_400_000;
/** Under a flood of commits it rests between rounds, so that evaluating never takes more than a quarter of the time. */
const REST_FACTOR = 3;
const LONGEST_REST_MS = 250;
const CLOSED_JOB = 'alarms-closed-windows';

export interface Evaluator {
  /** Takes the lease, evaluates every system once, then whatever a commit marks, and each second what time can change. */
  start(): Promise<void>;
  /** What the second does: delays, shelves, open runs, alarms that may return, late doses. */
  tick(): Promise<void>;
  /** Resolves when nothing that was committed before waits for evaluation. */
  settled(): Promise<void>;
  close(): Promise<void>;
}

/** Evaluates alarms from rows: a commit marks its system, one evaluator under a lease takes it up. */
export function createEvaluator(core: Core, port: StopPort, modules: readonly AlarmRuleModule[]): Evaluator {
  const { writer, reader, clock, log } = core;
  const lease = createLease(uuidv7());
  /** Systems whose evaluation failed: tried again at the next tick, not at every commit. */
  const failed = new Set<string>();
  let draining: Promise<void> | null = null;
  let isAskedAgain = false;
  let isClosed = false;
  let unsubscribe = () => {};
  let timer: ReturnType<typeof setInterval> | undefined;

  async function evaluate(systemId: string): Promise<void> {
    try {
      const result = await writer.commit((tx) => evaluateIn(tx, systemId));
      if (result === null) return;
      for (const { code, error } of result.failures) log.error({ systemId, code, err: error }, 'An alarm rule failed; it is tried again');
      if (result.failures.length > 0) failed.add(systemId);
      if (result.stops.length > 0) port.dispatch();
    } catch (error) {
      failed.add(systemId);
      log.error({ systemId, err: error }, 'The alarms of a system could not be evaluated; it is tried again');
    }
  }

  function evaluateIn(tx: Transaction, systemId: string) {
    const nowMs = clock.nowMs();
    const watch = lease.hold(tx, nowMs);
    if (watch === null) return null;
    const dirty = tx.first(query.selectFrom('dirtySystem').select('sinceMs').where('systemId', '=', systemId));
    if (dirty !== undefined) tx.run(query.deleteFrom('dirtySystem').where('systemId', '=', systemId));
    // Rows that waited while the server was down count as if they had been evaluated when they came.
    const openFromMs = Math.max(Math.min(nowMs, dirty?.sinceMs ?? nowMs), nowMs - LONGEST_WAIT_MS) - OPEN_WINDOW_MS;
    const result = evaluateSystem(tx, { systemId, nowMs, openFromMs, watch, modules }, port);
    if (result.failures.length > 0) markDirty(tx, systemId, dirty?.sinceMs ?? nowMs);
    return result;
  }

  async function drain(): Promise<void> {
    let restMs = 0;
    do {
      isAskedAgain = false;
      const dirty = await reader.selectFrom('dirtySystem').select('systemId').execute();
      const ready = dirty.map((row) => row.systemId).filter((systemId) => !failed.has(systemId));
      if (ready.length === 0) continue;
      if (restMs > 0) await new Promise((resolve) => setTimeout(resolve, restMs));
      const beganMs = performance.now();
      await Promise.all(ready.map(evaluate));
      restMs = Math.min(LONGEST_REST_MS, REST_FACTOR * (performance.now() - beganMs));
    } while (isAskedAgain && !isClosed);
  }

  function wake(): void {
    if (isClosed) return;
    if (draining !== null) {
      isAskedAgain = true;
      return;
    }
    draining = drain()
      .catch((error: unknown) => log.error({ err: error }, 'The marks for the alarms could not be read; they are read again'))
      .finally(() => {
        draining = null;
        if (isAskedAgain) wake();
      });
  }

  async function settled(): Promise<void> {
    while (draining !== null) await draining;
  }

  /** Systems in which time alone can change something. */
  async function timed(nowMs: number): Promise<string[]> {
    const rows = await reader
      .selectFrom('alarmPending')
      .select('systemId')
      .union(
        reader
          .selectFrom('run')
          .select('systemId')
          .where('endedMs', 'is', null)
          // A run whose end got lost is over when its head began another one; time changes nothing about it.
          .where((where) =>
            where.not(
              where.exists(
                where
                  .selectFrom('run as later')
                  .select('later.run')
                  .whereRef('later.systemId', '=', 'run.systemId')
                  .whereRef('later.begunMs', '>', 'run.begunMs')
                  .whereRef('later.deviceId', '=', 'run.deviceId')
                  .whereRef('later.head', '=', 'run.head'),
              ),
            ),
          ),
      )
      .union(
        reader
          .selectFrom('alarm')
          .select('systemId')
          .where('closedAtMs', 'is', null)
          .where((where) => where.or([where('active', '=', 1), where('shelvedUntilMs', '<=', nowMs)])),
      )
      .execute();
    return rows.map((row) => row.systemId);
  }

  async function recordLate(): Promise<void> {
    const isMore = await writer.commit((tx) => {
      const nowMs = clock.nowMs();
      const watch = lease.hold(tx, nowMs);
      if (watch === null) return false;
      const job = tx.first(query.selectFrom('job').select('cursor').where('name', '=', CLOSED_JOB));
      const cursorSeq = Number(job?.cursor ?? 0);
      const result = recordClosedWindows(tx, { cursorSeq, nowMs, watch, modules });
      if (result.cursorSeq !== cursorSeq) saveCursor(tx, result.cursorSeq);
      return result.isMore;
    });
    if (isMore && !isClosed) await recordLate();
  }

  async function tick(): Promise<void> {
    failed.clear();
    await Promise.all((await timed(clock.nowMs())).map(evaluate));
    wake();
    await settled();
    await recordLate();
  }

  let ticking: Promise<void> | null = null;
  function onTimer(): void {
    if (ticking !== null || isClosed) return;
    ticking = tick()
      .catch((error: unknown) => log.error({ err: error }, 'The alarm clock stumbled; it goes on'))
      .finally(() => (ticking = null));
  }

  return {
    async start() {
      await writer.commit((tx) => lease.take(tx, clock.nowMs()));
      unsubscribe = writer.onCommitted(wake);
      const systems = await reader.selectFrom('system').select('id').execute();
      await Promise.all(systems.map((system) => evaluate(system.id)));
      wake();
      timer = setInterval(onTimer, TICK_MS);
    },
    tick,
    settled,
    async close() {
      isClosed = true;
      clearInterval(timer);
      unsubscribe();
      await ticking;
      await settled();
      await writer.commit((tx) => lease.release(tx, clock.nowMs()));
    },
  };
}

function saveCursor(tx: Transaction, cursorSeq: number): void {
  const cursor = String(cursorSeq);
  tx.run(
    query
      .insertInto('job')
      .values({ name: CLOSED_JOB, leaseOwner: null, leaseUntilMs: 0, fencingToken: 0, cursor })
      .onConflict((conflict) => conflict.column('name').doUpdateSet({ cursor })),
  );
}
