import type { SchedulePayload, StatePayload } from '#shared/mqtt/payloads.ts';
import { followClock, forgetOld, roomMl } from './ceilings.ts';
import { planOf, refusal, takeOrder } from './orders.ts';
import type { HeadState, PumpMessage, PumpSpec, PumpState, PumpTime } from './pump-state.ts';
import { advanceRun, beginRun, endInterrupted, endRun, endsInMs, msToNextReport, runLimitMl } from './runs.ts';
import { nextDueMs, slotToStart } from './slots.ts';

/** What happens to a pump. `tick` is the passing of time alone. */
export type PumpInput =
  | { kind: 'boot' }
  | { kind: 'tick' }
  | { kind: 'schedule'; payload: SchedulePayload | null }
  | { kind: 'order'; payload: unknown }
  /** Somebody presses the button at the pump. */
  | { kind: 'button'; head: number; ml: number }
  | { kind: 'calibrate'; head: number; seconds: number };

/** What the pump finds itself in: its clocks, and the heads whose relay does not open any more. */
export interface PumpSurroundings {
  time: PumpTime;
  stuckHeads?: readonly number[];
}

export interface PumpStep {
  state: PumpState;
  messages: PumpMessage[];
  /** Why a press of the button did nothing; null when it did something, or nobody pressed. */
  refused: string | null;
  /** The next step is due in this many milliseconds at the latest. */
  wakeInMs: number;
}

const LONGEST_WAIT_MS = 3_600_000;
/** More than the slots of two days, which is as far back as a moved clock can make a slot seem new. */
const HANDLED_SLOTS_KEPT = 200;

/** One step of a pump: from what it knew and what happened to what it knows and what it says. Changes nothing that it is given. */
export function stepPump(spec: PumpSpec, before: PumpState, input: PumpInput, surroundings: PumpSurroundings): PumpStep {
  const { time, stuckHeads = [] } = surroundings;
  const state = structuredClone(before);
  const messages: PumpMessage[] = [];
  let refused: string | null = null;
  const headOf = (number: number) => state.heads.find((head) => head.head === number);
  const limitOf = (head: HeadState) =>
    head.current === null ? null : runLimitMl(state, head, head.current, planOf(state, head.head), time, stuckHeads.includes(head.head));

  if (input.kind === 'boot') {
    for (const head of state.heads) if (head.current !== null) messages.push(...endInterrupted(state, head, head.current));
    state.boot += 1;
    state.time = time;
  }
  followClock(state, time);
  state.time = time;

  for (const head of state.heads) {
    if (head.current !== null) messages.push(...advanceRun(state, head, head.current, limitOf(head), time));
    forgetOld(head, time);
  }

  switch (input.kind) {
    case 'schedule':
      // The same message again, as at every connection, is not a new schedule.
      if (JSON.stringify(input.payload) !== JSON.stringify(state.schedule)) {
        state.schedule = input.payload;
        state.scheduleArrivedMs = time.isSet ? time.nowMs : null;
      }
      break;
    case 'order':
      messages.push(...takeOrder(state, input.payload, time));
      break;
    case 'button':
    case 'calibrate': {
      const head = headOf(input.head);
      const plan = planOf(state, input.head);
      const mlPerSecond = plan?.mlPerSecond ?? spec.defaultMlPerSecond;
      const targetMl = input.kind === 'button' ? input.ml : input.seconds * mlPerSecond;
      if (head === undefined) refused = 'head';
      else if (input.kind === 'button') refused = refusal(state, head, targetMl, time);
      else if (head.stopped) refused = 'stopped';
      else if (head.current !== null) refused = 'busy';
      if (refused !== null || head === undefined) break;
      messages.push(...beginRun(state, head, { cause: input.kind === 'button' ? 'button' : 'calibration', targetMl, mlPerSecond }, time));
      break;
    }
    case 'boot':
    case 'tick':
      break;
  }

  for (const head of state.heads) {
    if (!stuckHeads.includes(head.head)) endWhereNothingMayRun(state, head, messages);
    startDueSlot(state, head, time, messages);
  }
  return { state, messages, refused, wakeInMs: wakeInMs(state, limitOf, time) };
}

/** A head that is not listed, or not enabled, gives nothing: a schedule that says so ends the run in progress. */
function endWhereNothingMayRun(state: PumpState, head: HeadState, messages: PumpMessage[]): void {
  const run = head.current;
  if (run === null || run.cause === 'calibration' || planOf(state, head.head) !== undefined) return;
  messages.push(...endRun(state, head, run));
}

function startDueSlot(state: PumpState, head: HeadState, time: PumpTime, messages: PumpMessage[]): void {
  const plan = planOf(state, head.head);
  if (!time.isSet || plan === undefined || state.schedule === null || state.scheduleArrivedMs === null) return;
  const dueMs = slotToStart(head, plan, state.scheduleArrivedMs, time.nowMs);
  // A busy head may still come free within the slot's grace.
  if (dueMs === undefined || head.current !== null) return;
  head.handledDueMs = [...head.handledDueMs, dueMs].slice(-HANDLED_SLOTS_KEPT);
  if (head.stopped || plan.slotMl <= 0 || plan.slotMl > roomMl(state, head, plan, time) + 1e-4) return;
  messages.push(
    ...beginRun(
      state,
      head,
      { cause: 'schedule', targetMl: plan.slotMl, mlPerSecond: plan.mlPerSecond, scheduleVersion: state.schedule.version, dueMs },
      time,
    ),
  );
}

function wakeInMs(state: PumpState, limitOf: (head: HeadState) => number | null, time: PumpTime): number {
  const waits = [LONGEST_WAIT_MS];
  for (const head of state.heads) {
    const plan = planOf(state, head.head);
    if (head.current !== null) {
      waits.push(msToNextReport(head.current, time.upMs));
      const ends = endsInMs(head.current, limitOf(head), time.upMs);
      if (ends !== null) waits.push(ends);
    }
    if (plan === undefined || !time.isSet) continue;
    // A second slot due in the same minute waits for the end of the first, which is among the waits already.
    const due = nextDueMs(plan, time.nowMs);
    if (due !== undefined) waits.push(due - time.nowMs);
  }
  return Math.max(1, Math.min(...waits));
}

/** The pump's own `state` message. */
export function describePump(state: PumpState, atMs: number): StatePayload {
  return {
    online: true,
    atMs,
    scheduleVersion: state.schedule?.version ?? null,
    heads: state.heads.map((head) => ({
      head: head.head,
      state: head.stopped ? 'stopped' : head.current !== null ? 'dosing' : 'idle',
      odometerMl: Math.round(head.odometerMl * 10_000) / 10_000,
      odometerEpoch: state.odometerEpoch,
    })),
  };
}
