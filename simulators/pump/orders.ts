import { orderPayloadSchema, type OrderPayload, type ReceiptPayload, type ScheduleHead } from '#shared/mqtt/payloads.ts';
import { z } from 'zod';
import { roomMl } from './ceilings.ts';
import type { HeadState, PumpMessage, PumpState, PumpTime } from './pump-state.ts';
import { beginRun, endRun, type RunOrigin } from './runs.ts';

/** Receipts kept to answer a repeated order; one a minute for three hours. */
const RECEIPTS_KEPT = 200;

const namedSchema = z.object({ id: z.string().min(1).max(80) });

export function planOf(state: PumpState, head: number): ScheduleHead | undefined {
  return state.schedule?.heads.find((plan) => plan.head === head && plan.enabled);
}

/** Why a delivery that somebody asks for cannot start, or null when it can. */
export function refusal(state: PumpState, head: HeadState, targetMl: number, time: PumpTime): string | null {
  if (head.stopped) return 'stopped';
  const plan = planOf(state, head.head);
  if (plan === undefined) return 'disabled';
  if (head.current !== null) return 'busy';
  // A ten-thousandth of a mL forgives the last digit of a sum, not a dose.
  return targetMl > roomMl(state, head, plan, time) + 1e-4 ? 'ceiling' : null;
}

function answer(state: PumpState, order: string, atMs: number, outcome: ReceiptPayload['outcome'], why?: string): PumpMessage[] {
  const payload: ReceiptPayload = { order, atMs, outcome, why };
  state.receipts = [...state.receipts, payload].slice(-RECEIPTS_KEPT);
  return [{ word: 'receipt', payload }];
}

/** What `dose` and `prime` are to give. */
function wanted(order: OrderPayload, plan: ScheduleHead | undefined): Pick<RunOrigin, 'cause' | 'targetMl'> | null {
  if (order.do === 'dose') return order.ml !== undefined && order.ml > 0 ? { cause: 'order', targetMl: order.ml } : null;
  if (order.seconds === undefined) return null;
  return { cause: 'prime', targetMl: order.seconds * (plan?.mlPerSecond ?? 0) };
}

/** Obeys or refuses one order. A repeated id gets the receipt that it had and does nothing else. */
export function takeOrder(state: PumpState, payload: unknown, time: PumpTime): PumpMessage[] {
  const named = namedSchema.safeParse(payload);
  // What has no id cannot be answered.
  if (!named.success) return [];
  const { id } = named.data;
  const earlier = state.receipts.find((receipt) => receipt.order === id);
  if (earlier !== undefined) return [{ word: 'receipt', payload: earlier }];

  const refuse = (why: string) => answer(state, id, time.nowMs, 'refused', why);
  const parsed = orderPayloadSchema.safeParse(payload);
  if (!parsed.success) return refuse('shape');
  const order = parsed.data;
  const head = state.heads.find((one) => one.head === order.head);
  if (head === undefined) return refuse('head');

  if (order.do === 'stop') {
    head.stopped = true;
    const ended = head.current === null ? [] : endRun(state, head, head.current);
    return [...ended, ...answer(state, id, time.nowMs, 'done')];
  }
  if (!time.isSet) return refuse('clock');
  if (order.expiresAtMs === null) return refuse('expiry');
  if (time.nowMs >= order.expiresAtMs) return answer(state, id, time.nowMs, 'expired');
  if (order.do === 'resume') {
    head.stopped = false;
    return answer(state, id, time.nowMs, 'done');
  }

  const plan = planOf(state, head.head);
  const what = wanted(order, plan);
  if (what === null) return refuse('shape');
  const why = refusal(state, head, what.targetMl, time);
  if (why !== null || plan === undefined) return refuse(why ?? 'disabled');
  const begun = beginRun(state, head, { ...what, order: id, mlPerSecond: plan.mlPerSecond }, time);
  return [...answer(state, id, time.nowMs, 'done'), ...begun];
}
