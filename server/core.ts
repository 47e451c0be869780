import type { Logger } from 'pino';
import type { Clock } from './clock.ts';
import type { Config } from './config.ts';
import type { Reader } from './db/open.ts';
import type { Writer } from './db/writer.ts';

/** What every service stands on; built once and passed explicitly. */
export interface Core {
  readonly config: Config;
  readonly clock: Clock;
  readonly log: Logger;
  readonly databaseFile: string;
  readonly writer: Writer;
  readonly reader: Reader;
}
