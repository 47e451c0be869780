import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import pino from 'pino';
import type { Clock } from '../../server/clock.ts';
import { readConfig } from '../../server/config.ts';
import { openCore, type OpenCore } from '../../server/open-core.ts';

export interface ManualClock extends Clock {
  set(nowMs: number): void;
  advance(byMs: number): void;
}

/** A clock that stands still until a test moves it. */
export function manualClock(startMs = Date.parse('2026-03-01T12:00:00Z')): ManualClock {
  let nowMs = startMs;
  return {
    nowMs: () => nowMs,
    set: (value) => (nowMs = value),
    advance: (byMs) => (nowMs += byMs),
  };
}

export interface TestCore extends OpenCore {
  folder: string;
}

/** A real database in a temporary folder, removed by `close()`. */
export async function openTestCore(clock: Clock, environment: Record<string, string> = {}): Promise<TestCore> {
  const folder = mkdtempSync(path.join(tmpdir(), 'steadfall-test-'));
  const config = readConfig({ DATA_DIR: folder, DEMO: '0', PORT: '0', MQTT_PORT: '0', ...environment });
  const opened = await openCore(config, clock, pino({ level: 'silent' }));
  return {
    ...opened,
    folder,
    async close() {
      await opened.close();
      rmSync(folder, { recursive: true, force: true });
    },
  };
}
