import type { RunPayload, ScheduleHead } from '#shared/mqtt/payloads.ts';
import { roomMl } from './ceilings.ts';
import type { CurrentRun, HeadState, PumpMessage, PumpState, PumpTime } from './pump-state.ts';

const REPORT_EVERY_MS = 1_000;

/** Volumes leave the pump in tenths of a microlitre; more digits would claim what no motor can do. */
const rounded = (ml: number) => Math.round(ml * 10_000) / 10_000;

function runMessage(
  state: PumpState,
  head: HeadState,
  run: CurrentRun,
  phase: RunPayload['phase'],
  atMs: number,
  more: Partial<RunPayload> = {},
): PumpMessage {
  return {
    word: 'run',
    payload: {
      run: run.run,
      head: head.head,
      phase,
      atMs: Math.round(atMs),
      ml: rounded(run.ml),
      cause: run.cause,
      scheduleVersion: run.scheduleVersion,
      dueMs: run.dueMs,
      order: run.order,
      begunMs: run.begunMs,
      onMs: Math.round(run.onMs),
      odometerMl: rounded(head.odometerMl),
      odometerEpoch: state.odometerEpoch,
      ...more,
    },
  };
}

export interface RunOrigin {
  cause: RunPayload['cause'];
  targetMl: number;
  mlPerSecond: number;
  order?: string;
  scheduleVersion?: number;
  dueMs?: number;
}

export function beginRun(state: PumpState, head: HeadState, origin: RunOrigin, time: PumpTime): PumpMessage[] {
  state.runCount += 1;
  const run: CurrentRun = {
    run: `${state.origin}-${state.runCount}`,
    ...origin,
    begunMs: time.nowMs,
    begunUpMs: time.upMs,
    onMs: 0,
    ml: 0,
    lastMs: time.nowMs,
    lastReportUpMs: time.upMs,
  };
  head.current = run;
  return [runMessage(state, head, run, 'begun', time.nowMs)];
}

/** The most that this run may have given when it ends, mL; null when nothing but a stop ends it (a stuck relay). */
export function runLimitMl(
  state: PumpState,
  head: HeadState,
  run: CurrentRun,
  limits: ScheduleHead | undefined,
  time: PumpTime,
  isStuck: boolean,
): number | null {
  if (isStuck) return null;
  if (run.cause === 'calibration') return run.targetMl;
  return limits === undefined ? 0 : Math.min(run.targetMl, roomMl(state, head, limits, time));
}

/** Motor time after which a volume is reached, ms. */
function motorMs(ml: number, mlPerSecond: number): number {
  return (ml / mlPerSecond) * 1_000;
}

/** Whole milliseconds until the run reaches its limit; null when it has none. */
export function endsInMs(run: CurrentRun, limitMl: number | null, upMs: number): number | null {
  return limitMl === null ? null : Math.max(0, Math.ceil(motorMs(limitMl, run.mlPerSecond) - (upMs - run.begunUpMs)));
}

/** Carries a run on to now, never past its limit, and says so about each second. */
export function advanceRun(state: PumpState, head: HeadState, run: CurrentRun, limitMl: number | null, time: PumpTime): PumpMessage[] {
  const sinceBeginMs = time.upMs - run.begunUpMs;
  const mostMs = limitMl === null ? sinceBeginMs : motorMs(limitMl, run.mlPerSecond);
  // A limit that fell under what was already given (a new schedule) ends the run without taking anything back.
  const onMs = Math.max(run.onMs, Math.min(sinceBeginMs, mostMs));
  const hasReachedLimit = limitMl !== null && sinceBeginMs >= mostMs;
  const ml = hasReachedLimit ? Math.max(run.ml, limitMl) : (onMs / 1_000) * run.mlPerSecond;
  head.odometerMl += ml - run.ml;
  run.lastMs = time.nowMs - (sinceBeginMs - onMs);
  run.onMs = onMs;
  run.ml = ml;
  if (hasReachedLimit) return endRun(state, head, run);
  if (time.upMs - run.lastReportUpMs < REPORT_EVERY_MS) return [];
  run.lastReportUpMs = time.upMs;
  return [runMessage(state, head, run, 'running', time.nowMs)];
}

export function endRun(state: PumpState, head: HeadState, run: CurrentRun): PumpMessage[] {
  head.current = null;
  if (run.cause !== 'calibration' && run.ml > 0) head.delivered.push({ atMs: run.lastMs, ml: run.ml, boot: state.boot });
  return [runMessage(state, head, run, 'ended', run.lastMs)];
}

/**
 * Ends a run that a power cut broke off: reported with what was last known, counted in the ceilings with all that it was to
 * give, since the motor ran on after the last note.
 */
export function endInterrupted(state: PumpState, head: HeadState, run: CurrentRun): PumpMessage[] {
  head.current = null;
  if (run.cause !== 'calibration') {
    const unseenMl = Math.max(0, run.targetMl - run.ml);
    head.delivered.push({ atMs: run.lastMs + (unseenMl / run.mlPerSecond) * 1_000, ml: run.ml + unseenMl, boot: state.boot });
  }
  return [runMessage(state, head, run, 'ended', run.lastMs, { interrupted: true })];
}

export function msToNextReport(run: CurrentRun, upMs: number): number {
  return Math.max(0, REPORT_EVERY_MS - (upMs - run.lastReportUpMs));
}
