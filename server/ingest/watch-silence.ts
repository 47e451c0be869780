import type { Core } from '../core.ts';
import { createWorkLoop } from '../orders/work-loop.ts';
import { SILENCE_MS } from './device-presence.ts';
import type { Ingest } from './ingest-port.ts';

const LOOK_EVERY_MS = 1_000;

/**
 * Looks each second for devices that fell silent. Not in the first 90 s after a start: devices could say nothing while the
 * server was down, and are given as long to come back.
 */
export function watchSilence({ clock, writer, log }: Core, ingest: Ingest): { close(): Promise<void> } {
  const startedMs = clock.nowMs();
  return createWorkLoop({
    name: 'Looking for silent devices',
    writer,
    log,
    everyMs: LOOK_EVERY_MS,
    async work() {
      const nowMs = clock.nowMs();
      if (nowMs - startedMs >= SILENCE_MS) await ingest.sweepSilent(nowMs);
    },
  });
}
