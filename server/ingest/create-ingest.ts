import type { Core } from '../core.ts';
import type { Ingest, IngestHooks } from './ingest-port.ts';

export function createIngest(core: Core, hooks: IngestHooks): Ingest {
  return {
    receive: async () => core.writer.commit(() => void hooks),
    recentMessages: () => [],
    sweepSilent: async () => {},
  };
}
