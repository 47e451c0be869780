import type { Transaction } from '../db/writer.ts';

/** Which pumps an interlock stops: every carbon head of the system, and the head concerned, registered or not. */
export interface InterlockStop {
  siteId: string;
  systemId: string;
  cause: 'interlock';
  alarmId: string;
  headConcerned: HeadAddress | null;
  nowMs: number;
}

export interface HeadAddress {
  deviceId: string;
  head: number;
}

/** What the alarms ask of whoever stops pumps. */
export interface StopPort {
  /**
   * Writes the stop, the disabling schedule and the stop order in the transaction of the alarm. Asked again for a head that
   * is stopped already, it keeps it stopped.
   */
  stopHeads(tx: Transaction, stop: InterlockStop): unknown;
  /** Called after the commit: sends the orders that it wrote, without waiting for the next round. */
  dispatch(): void;
}
