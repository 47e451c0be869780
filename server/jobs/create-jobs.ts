import type { Core } from '../core.ts';
import { createWorkLoop } from '../orders/work-loop.ts';
import { prune } from './prune.ts';

const PRUNE_EVERY_MS = 10 * 60_000;

export interface Jobs {
  /** Runs what is due now; resolves when it is done. */
  run(): Promise<void>;
  close(): Promise<void>;
}

/** Housekeeping that no request waits for. */
export function createJobs(core: Core): Jobs {
  let isClosed = false;
  const loop = createWorkLoop({
    name: 'Housekeeping',
    writer: core.writer,
    log: core.log,
    everyMs: PRUNE_EVERY_MS,
    work: () => prune(core, () => isClosed),
  });
  return {
    run: () => loop.run(),
    async close() {
      isClosed = true;
      await loop.close();
    },
  };
}
