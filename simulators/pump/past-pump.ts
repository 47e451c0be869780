import type { RunPayload, SchedulePayload } from '#shared/mqtt/payloads.ts';
import type { PumpSpec, PumpState } from './pump-state.ts';
import { stepPump, type PumpInput } from './step-pump.ts';

export interface PumpPast {
  state: PumpState;
  /** Whole runs, `ended` alone, in order. */
  runs: RunPayload[];
}

/**
 * Lets a pump live through a time that is past: what it was told at its times, and what it gave. The state that comes out has no
 * run in progress, since a run that the end would cut is left for whoever goes on from there.
 */
export function livePast(
  spec: PumpSpec,
  start: PumpState,
  fromMs: number,
  toMs: number,
  schedules: readonly { fromMs: number; payload: SchedulePayload }[],
): PumpPast {
  let state = start;
  let nowMs = fromMs;
  const runs: RunPayload[] = [];
  /** As of the last moment without a run in progress. */
  let idle = { state, runs: 0 };

  function put(input: PumpInput): number {
    const step = stepPump(spec, state, input, { time: { nowMs, isSet: true, upMs: nowMs - fromMs } });
    state = step.state;
    for (const message of step.messages) if (message.word === 'run' && message.payload.phase === 'ended') runs.push(message.payload);
    if (state.heads.every((head) => head.current === null)) idle = { state, runs: runs.length };
    return step.wakeInMs;
  }

  const told = schedules.filter((one) => one.fromMs > fromMs && one.fromMs <= toMs);
  let wakeInMs = put({ kind: 'boot' });
  while (nowMs < toMs) {
    const next = told[0];
    const wakeMs = Math.min(nowMs + wakeInMs, toMs, next?.fromMs ?? toMs);
    nowMs = wakeMs;
    if (next !== undefined && next.fromMs === nowMs) {
      told.shift();
      wakeInMs = put({ kind: 'schedule', payload: next.payload });
    } else wakeInMs = put({ kind: 'tick' });
  }
  return { state: idle.state, runs: runs.slice(0, idle.runs) };
}
