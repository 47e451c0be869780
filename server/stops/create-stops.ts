import type { StopAnswer } from '#shared/contract/control.ts';
import type { Actor } from '../audit/record-audit.ts';
import type { Core } from '../core.ts';
import { query } from '../db/open.ts';
import type { Transaction } from '../db/writer.ts';
import { NotFoundError } from '../errors.ts';
import type { Orders } from '../orders/create-orders.ts';
import type { Schedules } from '../schedules/create-schedules.ts';
import { completeResume } from './complete-resume.ts';
import { orderResume } from './order-resume.ts';
import { type Stop, stopHeads } from './stop-heads.ts';

export interface Stops {
  /** For whoever stops pumps inside a unit of its own: {@link stopHeads}, sent and published after that unit's commit. */
  stopHeads(tx: Transaction, stop: Stop): string[];
  /** Sends at once what was committed; it would be sent a moment later without this. */
  dispatch(): void;
  /** Stops for a person, and tells what the pumps answered within 5 s. */
  stop(systemId: string, headIds: readonly string[] | undefined, actor: Actor): Promise<StopAnswer>;
  /** Lets stopped heads dose again, and tells what the pumps answered within 5 s. */
  resume(systemId: string, headIds: readonly string[] | undefined, actor: Actor): Promise<StopAnswer>;
  close(): void;
}

/** Stop as a state: kept in rows, told to the pumps until they answer, ended only by a pump that resumed. */
export function createStops(core: Core, orders: Orders, schedules: Schedules): Stops {
  const wake = () => {
    orders.request();
    schedules.request();
  };

  const unsubscribe = orders.onSettled((tx, order, receivedMs) => {
    if (order.do !== 'resume' || order.state !== 'done') return;
    completeResume(tx, order, receivedMs);
    wake();
  });

  function siteIdOf(tx: Transaction, systemId: string): string {
    const system = tx.first(query.selectFrom('system').select('siteId').where('id', '=', systemId));
    if (system === undefined) throw new NotFoundError('There is no such system');
    return system.siteId;
  }

  function stopAndSend(tx: Transaction, stop: Stop): string[] {
    const orderIds = stopHeads(tx, stop);
    wake();
    return orderIds;
  }

  return {
    stopHeads: stopAndSend,
    dispatch() {
      void orders.dispatch();
      void schedules.publishDue();
    },
    async stop(systemId, headIds, actor) {
      const orderIds = await core.writer.commit((tx) => {
        const nowMs = core.clock.nowMs();
        return stopAndSend(tx, { cause: 'person', siteId: siteIdOf(tx, systemId), systemId, headIds, actor, nowMs });
      });
      return { orders: await orders.outcomes(orderIds) };
    },
    async resume(systemId, headIds, actor) {
      const isConnected = (deviceId: string) => orders.isConnected(deviceId);
      const orderIds = await core.writer.commit((tx) => {
        const nowMs = core.clock.nowMs();
        const ids = orderResume(tx, { siteId: siteIdOf(tx, systemId), systemId, headIds, actor, isConnected, nowMs });
        orders.request();
        return ids;
      });
      return { orders: await orders.outcomes(orderIds) };
    },
    close: unsubscribe,
  };
}
