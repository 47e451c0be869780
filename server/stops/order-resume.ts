import type { Actor } from '../audit/record-audit.ts';
import { query } from '../db/open.ts';
import type { Row } from '../db/schema.ts';
import type { Transaction } from '../db/writer.ts';
import { RuleError } from '../errors.ts';
import { insertOrder, waitingOrders } from '../orders/insert-order.ts';
import { openStop } from '../orders/open-stop.ts';
import { carbonHeads, type HeadAddress, namedHeads, reportedHeads, uniqueHeads } from './target-heads.ts';

export interface Resumption {
  siteId: string;
  systemId: string;
  /** Every stopped head that is in use when left out. */
  headIds: readonly string[] | undefined;
  actor: Actor;
  isConnected(deviceId: string): boolean;
  nowMs: number;
}

/** Off for longer than this, the bacteria have died back and the dose of before is too much: this project's own choice. */
const SAME_DOSE_FOR_MS = 48 * 3_600_000;

interface HeadToResume extends HeadAddress {
  stop: Row<'headStop'> | undefined;
}

function headsToResume(tx: Transaction, { systemId, headIds }: Resumption): HeadToResume[] {
  const saidStopped = reportedHeads(tx, systemId).filter((head) => head.state === 'stopped');
  const isStopped = ({ deviceId, head, stop }: HeadToResume) =>
    stop !== undefined || saidStopped.some((one) => one.deviceId === deviceId && one.head === head);
  const candidates = uniqueHeads(headIds === undefined ? headsOf(tx, systemId) : namedHeads(tx, systemId, headIds));
  const heads = candidates.map((head) => ({ ...head, stop: openStop(tx, head.deviceId, head.head) }));
  const stopped = heads.filter(isStopped);
  if (stopped.length === 0 || (headIds !== undefined && stopped.length < heads.length)) {
    throw new RuleError('not-stopped', headIds === undefined ? 'No head of this system is stopped' : 'Name only heads that are stopped');
  }
  return stopped;
}

/** Carbon heads, and whatever else in use was stopped by name. */
function headsOf(tx: Transaction, systemId: string): HeadAddress[] {
  const stopped = tx.all(
    query
      .selectFrom('headStop')
      .innerJoin('head', (join) => join.onRef('head.deviceId', '=', 'headStop.deviceId').onRef('head.head', '=', 'headStop.head'))
      .innerJoin('headAssignment', (join) => join.onRef('headAssignment.headId', '=', 'head.id').on('headAssignment.toMs', 'is', null))
      .select(['headStop.deviceId', 'headStop.head'])
      .where('headAssignment.systemId', '=', systemId)
      .where('headStop.resumedAtMs', 'is', null),
  );
  return [...carbonHeads(tx, systemId), ...stopped];
}

function requireNoLatch(tx: Transaction, systemId: string): void {
  const latched = tx.first(
    query.selectFrom('alarm').select('code').where('systemId', '=', systemId).where('latched', '=', 1).where('closedAtMs', 'is', null),
  );
  if (latched === undefined) return;
  throw new RuleError('alarm-latched', `The alarm ${latched.code} is latched: find its cause and reset it, then resume`);
}

function requireFreshDose(tx: Transaction, { deviceId, head, stop }: HeadToResume, nowMs: number): void {
  if (stop === undefined || nowMs - stop.stoppedAtMs <= SAME_DOSE_FOR_MS) return;
  const setSince = tx.first(
    query
      .selectFrom('headSchedule')
      .innerJoin('head', 'head.id', 'headSchedule.headId')
      .select('headSchedule.id')
      .where('head.deviceId', '=', deviceId)
      .where('head.head', '=', head)
      .where('headSchedule.fromMs', '>', stop.stoppedAtMs),
  );
  if (setSince !== undefined) return;
  throw new RuleError(
    'off-too-long',
    `Head ${head} was off for more than 48 h, and the bacteria have died back: set a new, lower dose first, then resume`,
  );
}

/**
 * Orders stopped heads to resume. Nothing else changes: a head stays stopped until its pump says that it resumed.
 *
 * @returns the ids of the orders; those of somebody who pressed a moment before where they still wait.
 * @throws {RuleError} `alarm-latched`, `off-too-long`, `not-stopped`, `stop-unanswered` or `pump-offline`.
 */
export function orderResume(tx: Transaction, resumption: Resumption): string[] {
  const { siteId, systemId, actor, isConnected, nowMs } = resumption;
  requireNoLatch(tx, systemId);
  const heads = headsToResume(tx, resumption);
  for (const head of heads) requireFreshDose(tx, head, nowMs);
  const away = heads.find((head) => !isConnected(head.deviceId));
  if (away !== undefined) {
    throw new RuleError(
      'pump-offline',
      `The pump of head ${away.head} is offline: bring it back first, or name only heads of pumps that are online`,
    );
  }
  return heads.map(({ deviceId, head }) => {
    const waiting = waitingOrders(tx, deviceId, head);
    if (waiting.some((order) => order.do === 'stop')) {
      throw new RuleError('stop-unanswered', `The pump has not yet answered the stop of head ${head}: wait until it has, then resume`);
    }
    const earlier = waiting.find((order) => order.do === 'resume');
    return earlier?.id ?? insertOrder(tx, { siteId, deviceId, head, do: 'resume', causeAlarmId: null, actor, nowMs });
  });
}
