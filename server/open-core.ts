import { mkdirSync } from 'node:fs';
import path from 'node:path';
import type { Logger } from 'pino';
import type { Clock } from './clock.ts';
import type { Config } from './config.ts';
import type { Core } from './core.ts';
import { migrate } from './db/migrate.ts';
import { openReader, openWritingConnection } from './db/open.ts';
import { createWriter } from './db/writer.ts';

export interface OpenCore {
  core: Core;
  /** Commits what is queued, checkpoints and closes both connections. */
  close(): Promise<void>;
}

/** Opens the database in `DATA_DIR`, migrated to the newest schema. */
export async function openCore(config: Config, clock: Clock, log: Logger): Promise<OpenCore> {
  mkdirSync(config.DATA_DIR, { recursive: true, mode: 0o700 });
  const databaseFile = path.join(config.DATA_DIR, 'steadfall.db');
  const connection = openWritingConnection(databaseFile);
  await migrate(connection);
  const reader = openReader(databaseFile);
  const writer = createWriter(connection);
  return {
    core: { config, clock, log, databaseFile, writer, reader },
    async close() {
      await writer.close();
      await reader.destroy();
      connection.pragma('wal_checkpoint(TRUNCATE)');
      connection.close();
    },
  };
}
