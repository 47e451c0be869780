import type { OrderOutcome } from '#shared/contract/control.ts';
import type { Row } from '../db/schema.ts';

/** What became of an order, as the contract says it. */
export function orderOutcome(order: Row<'deviceOrder'>, isConnected: boolean): OrderOutcome {
  const { id, deviceId, head, why, outcomeAtMs } = order;
  const at = outcomeAtMs === null ? null : new Date(outcomeAtMs).toISOString();
  return { id, deviceId, head, outcome: outcomeOf(order.state, isConnected), why, at };
}

function outcomeOf(state: Row<'deviceOrder'>['state'], isConnected: boolean): OrderOutcome['outcome'] {
  switch (state) {
    case 'waiting':
      return isConnected ? 'no-answer' : 'waiting';
    case 'superseded':
      return 'expired';
    case 'done':
    case 'refused':
    case 'expired':
      return state;
  }
}
