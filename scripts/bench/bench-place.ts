import { mkdirSync, mkdtempSync, rmSync } from 'node:fs';
import path from 'node:path';
import pino from 'pino';
import { uuidv7 } from 'uuidv7';
import { systemClock } from '../../server/clock.ts';
import { readConfig } from '../../server/config.ts';
import { query } from '../../server/db/open.ts';
import { openCore, type OpenCore } from '../../server/open-core.ts';

export const RESULTS_FOLDER = 'bench-results';

export interface BenchPump {
  siteId: string;
  systemId: string;
  deviceId: string;
  headId: string;
}

export interface BenchPlace extends OpenCore {
  /** A system of its own with one pump, of which one head gives carbon. */
  addPump(): Promise<BenchPump>;
}

/**
 * A real database in a temporary folder, removed by `close()`. The folder is beside the results and not in the system's
 * own, which may lie in memory, where a commit costs nothing.
 */
export async function openBenchPlace(): Promise<BenchPlace> {
  mkdirSync(RESULTS_FOLDER, { recursive: true });
  const folder = mkdtempSync(path.join(RESULTS_FOLDER, 'database-'));
  const config = readConfig({ DATA_DIR: folder, DEMO: '0', PORT: '0', MQTT_PORT: '0' });
  const opened = await openCore(config, systemClock, pino({ level: 'error' }));
  const siteId = uuidv7();
  const createdAtMs = systemClock.nowMs();
  const { writer } = opened.core;
  await writer.commit((tx) => tx.run(query.insertInto('site').values({ id: siteId, name: 'Bench', timeZone: 'UTC', createdAtMs })));

  return {
    ...opened,
    async addPump() {
      const pump = { siteId, systemId: uuidv7(), deviceId: uuidv7(), headId: uuidv7() };
      const { systemId, deviceId, headId } = pump;
      const volumes = { displayLitres: 400, sumpLitres: 80, displacementLitres: 60 };
      const device = { name: 'Pump', kind: 'pump' as const, secretHash: '', credentialVersion: 1 };
      const use = { kind: 'carbon' as const, productId: null, reservoirId: null, mlPerSecond: 1, smallestMl: 0.1 };
      const dates = { fromMs: createdAtMs - 30 * 86_400_000, toMs: null };
      await writer.commit((tx) => {
        tx.run(query.insertInto('system').values({ id: systemId, siteId, name: 'System', ...volumes, createdAtMs }));
        tx.run(query.insertInto('device').values({ id: deviceId, siteId, systemId, ...device, createdAtMs }));
        tx.run(query.insertInto('head').values({ id: headId, siteId, deviceId, head: 1, createdAtMs }));
        tx.run(query.insertInto('headAssignment').values({ id: uuidv7(), siteId, headId, systemId, ...use, ...dates, actorId: 'bench' }));
      });
      return pump;
    },
    async close() {
      await opened.close();
      rmSync(folder, { recursive: true, force: true });
    },
  };
}
