import { topicOf } from '#shared/mqtt/topics.ts';
import type { Core } from '../core.ts';
import type { Transaction } from '../db/writer.ts';
import { recordRun } from '../doses/record-run.ts';
import { sqliteSampleStore } from '../telemetry/sample-store.ts';
import { type DecodedMessage, decodeMessage } from './decode-message.ts';
import { applyState, markHeard, markOffline } from './device-presence.ts';
import type { IncomingMessage, Ingest, IngestHooks, MessageDevice } from './ingest-port.ts';
import { createRecentMessages } from './recent-messages.ts';
import { recordReject } from './record-reject.ts';
import { Refusal } from './refusal.ts';
import { storeSenml } from './store-senml.ts';
import { sweepSilent } from './sweep-silent.ts';

const deviceSql = 'select id, siteId, systemId from device where id = ?';

/** Takes what devices send into the database: each message is one unit of work, acknowledged once it is on disk. */
export function createIngest(core: Core, hooks: IngestHooks): Ingest {
  const recent = createRecentMessages();

  /** Returns whether the message told anything new. */
  function apply(tx: Transaction, device: MessageDevice, decoded: DecodedMessage, message: IncomingMessage): boolean {
    const { receivedMs } = message;
    const nowMs = core.clock.nowMs();
    switch (decoded.word) {
      case 'senml':
        return storeSenml(tx, sqliteSampleStore, device, decoded.senml, receivedMs, nowMs);
      case 'run': {
        const { run, isChanged } = recordRun(tx, device, decoded.run, receivedMs, nowMs);
        if (isChanged) hooks.onRun(tx, device, run, receivedMs);
        return isChanged;
      }
      case 'state':
        applyState(tx, device, decoded.state, { receivedMs, nowMs, retained: message.retained === true });
        // What a broker had kept may be older than a stop, and proves nothing of it.
        if (message.retained !== true) hooks.onState(tx, device, decoded.state, receivedMs);
        return true;
      case 'receipt':
        hooks.onReceipt(tx, device, decoded.receipt, receivedMs);
        return true;
    }
  }

  /** Returns what became of the message. */
  function take(tx: Transaction, decoded: DecodedMessage | Refusal, message: IncomingMessage): string {
    const { deviceId, word, payload, receivedMs, isWill } = message;
    const device = tx.prepare(deviceSql).get(deviceId) as MessageDevice | undefined;
    // It was removed while it was connected: nothing to keep, and nothing to send again.
    if (device === undefined) return 'unknown-device';
    const nowMs = core.clock.nowMs();
    if (isWill && word === 'state') {
      markOffline(tx, device, receivedMs, nowMs);
      hooks.onState(tx, device, { online: false }, receivedMs);
      return 'stored';
    }
    const isState = word === 'state' && !(decoded instanceof Refusal);
    if (!isState && !isWill && message.retained !== true) markHeard(tx, device, receivedMs, nowMs);
    try {
      if (decoded instanceof Refusal) throw decoded;
      return apply(tx, device, decoded, message) ? 'stored' : 'nothing-new';
    } catch (error) {
      if (!(error instanceof Refusal)) throw error;
      recordReject(tx, device, { topic: topicOf(deviceId, word), payload, receivedMs }, error.reason);
      return `refused:${error.reason}`;
    }
  }

  /** Outside the unit, so that what is expensive does not hold the transaction open. */
  function decode(message: IncomingMessage): DecodedMessage | Refusal {
    try {
      return decodeMessage(message);
    } catch (error) {
      if (error instanceof Refusal) return error;
      throw error;
    }
  }

  return {
    async receive(message) {
      const { deviceId, word, payload, receivedMs } = message;
      const note = (outcome: string) => recent.add({ deviceId, topic: topicOf(deviceId, word), payload, receivedMs, outcome });
      try {
        // No await before the commit is queued: messages are stored in the order in which they came.
        const decoded = decode(message);
        note(await core.writer.commit((tx) => take(tx, decoded, message)));
      } catch (error) {
        note('failed');
        core.log.error({ deviceId, word, error }, 'A message could not be stored, so it is not acknowledged');
        throw error;
      }
    },
    recentMessages: recent.of,
    sweepSilent: (nowMs) => sweepSilent(core, nowMs),
  };
}
