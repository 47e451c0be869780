import pino from 'pino';
import { createBroker } from '../../broker/create-broker.ts';
import type { DeviceMessage } from '../../broker/broker.ts';
import { systemClock } from '../../server/clock.ts';
import { readConfig } from '../../server/config.ts';
import { createIngest } from '../../server/ingest/create-ingest.ts';
import { openCore } from '../../server/open-core.ts';

/**
 * The broker and the ingest in a process of their own, to be killed. It loads everything first and then waits to be told
 * on its standard input where the database lies: `{"folder": .., "build": "right" | "acknowledges-first"}`.
 * Once it listens it says its port on its standard output.
 */
async function serve({ folder, build }: { folder: string; build: 'right' | 'acknowledges-first' }): Promise<void> {
  const { core } = await openCore(readConfig({ DATA_DIR: folder, DEMO: '0' }), systemClock, pino({ level: 'silent' }));
  const ingest = createIngest(core, { onReceipt: () => {}, onState: () => {}, onRun: () => {} });
  const receive = (message: DeviceMessage) => ingest.receive({ ...message, receivedMs: Date.now() });

  const behind: DeviceMessage[] = [];
  if (build === 'acknowledges-first') {
    setInterval(() => {
      for (const message of behind.splice(0)) void receive(message);
    }, 20);
  }
  const broker = await createBroker({
    host: '127.0.0.1',
    port: 0,
    log: { info: () => {}, warn: () => {} },
    limits: { messagesPerSecond: 1_000_000, burst: 1_000_000 },
    policy: {
      authenticate: async () => true,
      receive: build === 'right' ? receive : async (message) => void behind.push(message),
      connected: () => {},
      disconnected: () => {},
    },
  });
  process.stdout.write(`${broker.port}\n`);
}

process.stdin.once('data', (data: Buffer) => {
  void serve(JSON.parse(data.toString('utf8')) as Parameters<typeof serve>[0]);
});
process.stdout.write('loaded\n');
