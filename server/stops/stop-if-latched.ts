import { missingStop } from '../alarms/keep-stopped.ts';
import type { Transaction } from '../db/writer.ts';
import { stopHeads } from './stop-heads.ts';

/**
 * While an alarm of the system stands latched, stops what has come to carbon use without a stop. Call it in the unit that
 * brings a head to carbon or gives one a dose, before its schedule is written: no schedule then lets it dose even for a moment.
 */
export function stopIfLatched(tx: Transaction, at: { siteId: string; systemId: string; nowMs: number }): void {
  const missing = missingStop(tx, at);
  if (missing !== null) stopHeads(tx, missing);
}
