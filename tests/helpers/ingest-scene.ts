import { uuidv7 } from 'uuidv7';
import { topicOf, type Uplink } from '#shared/mqtt/topics.ts';
import { createIngest } from '../../server/ingest/create-ingest.ts';
import type { Ingest, IngestHooks } from '../../server/ingest/ingest-port.ts';
import { type ManualClock, manualClock, openTestCore, type TestCore } from './core.ts';
import { addSiteRow, addSystemRow, insertRow } from './rows.ts';

export interface IngestScene extends TestCore {
  clock: ManualClock;
  ingest: Ingest;
  siteId: string;
  systemId: string;
  deviceId: string;
  /** Takes in a message that arrives now; an object is sent as JSON. */
  send(word: Uplink, payload: object | string | Buffer, more?: { isWill?: boolean; retained?: boolean; deviceId?: string }): Promise<void>;
  /** What became of the newest message. */
  outcome(): string | undefined;
  topic(word: Uplink): string;
}

export const noHooks: IngestHooks = { onReceipt: () => {}, onState: () => {}, onRun: () => {} };

/** A system with one device, and the ingest on a real database with a clock that stands at 2026-03-01 12:00 UTC. */
export async function openIngestScene(hooks: Partial<IngestHooks> = {}): Promise<IngestScene> {
  const clock = manualClock();
  const opened = await openTestCore(clock);
  const { core } = opened;
  const siteId = await addSiteRow(core);
  const systemId = await addSystemRow(core, siteId);
  const deviceId = await addDeviceRow(core, siteId, systemId);
  const ingest = createIngest(core, { ...noHooks, ...hooks });
  return {
    ...opened,
    clock,
    ingest,
    siteId,
    systemId,
    deviceId,
    send: (word, payload, more = {}) =>
      ingest.receive({
        deviceId,
        word,
        payload: Buffer.isBuffer(payload) ? payload : Buffer.from(typeof payload === 'string' ? payload : JSON.stringify(payload)),
        receivedMs: clock.nowMs(),
        isWill: false,
        ...more,
      }),
    outcome: () => ingest.recentMessages(deviceId)[0]?.outcome,
    topic: (word) => topicOf(deviceId, word),
  };
}

export async function addDeviceRow(core: TestCore['core'], siteId: string, systemId: string): Promise<string> {
  const id = uuidv7();
  await insertRow(core, 'device', {
    id,
    siteId,
    systemId,
    name: 'Doser',
    kind: 'pump',
    secretHash: '',
    credentialVersion: 1,
    createdAtMs: core.clock.nowMs(),
  });
  return id;
}
