import type { OrderPayload, ReceiptPayload, RunPayload, ScheduleHead, SchedulePayload } from '#shared/mqtt/payloads.ts';
import { newPump, type PumpMessage, type PumpState } from '../../../simulators/pump/pump-state.ts';
import { describePump, stepPump, type PumpInput, type PumpStep } from '../../../simulators/pump/step-pump.ts';

export const noonMs = Date.parse('2026-03-01T12:00:00Z');

/** One head, 0.6 mL at 12:10 and 14:00 UTC; 1 mL takes one second, so that times can be read off. */
export function plan(head: Partial<ScheduleHead> = {}, version = 1_767_225_600): SchedulePayload {
  return {
    version,
    heads: [
      {
        head: 1,
        enabled: true,
        slotMl: 0.6,
        slotsUtcMin: [730, 840],
        mlPerSecond: 1,
        maxMlPerRun: 5,
        maxMlPerHour: 10,
        maxMlPerDay: 20,
        ...head,
      },
    ],
  };
}

/** A pump on a bench: hands it inputs at times that the test sets, and collects what it says. */
export function pumpBench(startMs = noonMs) {
  const spec = { heads: [1, 2], defaultMlPerSecond: 1 };
  let state: PumpState = newPump(spec, 'p', 7);
  let nowMs = startMs;
  let upMs = 0;
  let clockIsSet = true;
  let stuckHeads: number[] = [];
  let said: PumpMessage[] = [];
  let orders = 0;
  let last: PumpStep;

  function put(input: PumpInput): PumpStep {
    last = stepPump(spec, state, input, { time: { nowMs: clockIsSet ? nowMs : upMs, isSet: clockIsSet, upMs }, stuckHeads });
    state = last.state;
    said.push(...last.messages);
    return last;
  }
  last = put({ kind: 'boot' });

  const bench = {
    put,
    get state() {
      return state;
    },
    get nowMs() {
      return nowMs;
    },
    /** Lets time pass as a process does: sleeping as long as each step says, never longer. */
    pass(ms: number) {
      let leftMs = ms;
      while (leftMs > 0) {
        const sleptMs = Math.min(leftMs, last.wakeInMs);
        leftMs -= sleptMs;
        nowMs += sleptMs;
        upMs += sleptMs;
        put({ kind: 'tick' });
      }
    },
    /** Time goes by while nobody looks, as in a stalled process. */
    skip(ms: number) {
      nowMs += ms;
      upMs += ms;
      put({ kind: 'tick' });
    },
    /** No power for a while. */
    restart(offMs = 0, knowsTheTime = clockIsSet) {
      clockIsSet = knowsTheTime;
      nowMs += offMs;
      upMs = 0;
      put({ kind: 'boot' });
    },
    setClock(isSet: boolean) {
      clockIsSet = isSet;
      put({ kind: 'tick' });
    },
    moveClock(byMs: number) {
      nowMs += byMs;
      put({ kind: 'tick' });
    },
    stick(...heads: number[]) {
      stuckHeads = heads;
    },
    order(order: Partial<OrderPayload>) {
      orders += 1;
      const whole = { id: `order-${orders}`, expiresAtMs: nowMs + 60_000, head: 1, do: 'stop', ...order };
      put({ kind: 'order', payload: whole });
      return whole.id;
    },
    /** What it said since the last time. */
    take() {
      const taken = said;
      said = [];
      return taken;
    },
    takeRuns(): RunPayload[] {
      return bench.take().flatMap((message) => (message.word === 'run' ? [message.payload] : []));
    },
    takeReceipts(): ReceiptPayload[] {
      return bench.take().flatMap((message) => (message.word === 'receipt' ? [message.payload] : []));
    },
    describe: () => describePump(state, nowMs),
    headState: (head = 1) => describePump(state, nowMs).heads?.find((one) => one.head === head)?.state,
  };
  return bench;
}
