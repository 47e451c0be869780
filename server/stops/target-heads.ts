import { z } from 'zod';
import { reportedHeadSchema } from '#shared/contract/devices.ts';
import { query } from '../db/open.ts';
import type { Transaction } from '../db/writer.ts';
import { BadInputError } from '../errors.ts';

/** A head of a pump, registered or not. */
export interface HeadAddress {
  deviceId: string;
  head: number;
}

const DAY_MS = 86_400_000;
const reportedHeadsSchema = z.array(reportedHeadSchema.pick({ head: true, state: true }));

const keyOf = ({ deviceId, head }: HeadAddress) => `${deviceId} ${head}`;

export function uniqueHeads(heads: readonly HeadAddress[]): HeadAddress[] {
  return [...new Map(heads.map((head) => [keyOf(head), { deviceId: head.deviceId, head: head.head }])).values()];
}

/** The heads in use on a system that have one of these ids. @throws {BadInputError} for an id that is none of them. */
export function namedHeads(tx: Transaction, systemId: string, headIds: readonly string[]): HeadAddress[] {
  const rows = headsInUse(tx, systemId);
  return headIds.map((headId, index) => {
    const row = rows.find((one) => one.headId === headId);
    if (row === undefined) throw new BadInputError([{ path: `heads.${index}`, message: 'This head is not in use on this system' }]);
    return { deviceId: row.deviceId, head: row.head };
  });
}

/** Heads that give carbon to the system as registered. */
export function carbonHeads(tx: Transaction, systemId: string): HeadAddress[] {
  return headsInUse(tx, systemId).filter((row) => row.kind === 'carbon');
}

/** What the pumps of a system say of their heads, newest report each. */
export function reportedHeads(tx: Transaction, systemId: string): (HeadAddress & { state: 'idle' | 'dosing' | 'stopped' })[] {
  const devices = tx.all(
    query
      .selectFrom('deviceState')
      .innerJoin('device', 'device.id', 'deviceState.deviceId')
      .select(['device.id as deviceId', 'deviceState.heads'])
      .where('device.systemId', '=', systemId),
  );
  return devices.flatMap(({ deviceId, heads }) =>
    reportedHeadsSchema.parse(JSON.parse(heads)).map(({ head, state }) => ({ deviceId, head, state })),
  );
}

/**
 * Heads of the system's own pumps that nobody registered and that may be giving carbon: what such a head gives counts as
 * carbon of unknown strength. Those that ran in the last day or are dosing now; with `evenIfIdle`, every one reported.
 */
export function unregisteredHeads(
  tx: Transaction,
  systemId: string,
  nowMs: number,
  { evenIfIdle }: { evenIfIdle: boolean },
): HeadAddress[] {
  const reported = reportedHeads(tx, systemId).filter((head) => evenIfIdle || head.state === 'dosing');
  const ran = tx.all(
    query
      .selectFrom('run')
      .select(['deviceId', 'head'])
      .distinct()
      .where('systemId', '=', systemId)
      .where('headId', 'is', null)
      .where('begunMs', '>', nowMs - DAY_MS),
  );
  const registered = new Set(
    tx
      .all(
        query
          .selectFrom('head')
          .innerJoin('headAssignment', (join) => join.onRef('headAssignment.headId', '=', 'head.id').on('headAssignment.toMs', 'is', null))
          .innerJoin('device', 'device.id', 'head.deviceId')
          .select(['head.deviceId', 'head.head'])
          .where('device.systemId', '=', systemId),
      )
      .map(keyOf),
  );
  return uniqueHeads([...reported, ...ran]).filter((head) => !registered.has(keyOf(head)));
}

function headsInUse(tx: Transaction, systemId: string) {
  return tx.all(
    query
      .selectFrom('headAssignment')
      .innerJoin('head', 'head.id', 'headAssignment.headId')
      .select(['head.id as headId', 'head.deviceId', 'head.head', 'headAssignment.kind'])
      .where('headAssignment.systemId', '=', systemId)
      .where('headAssignment.toMs', 'is', null)
      .orderBy('head.deviceId')
      .orderBy('head.head'),
  );
}
