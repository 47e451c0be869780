import { createRequire } from 'node:module';
import { pathToFileURL } from 'node:url';
import { Worker } from 'node:worker_threads';
import type { Points } from '#shared/contract/telemetry.ts';
import type { PointsRequest } from './read-points.ts';

export interface PointsQuestion {
  id: number;
  request: PointsRequest;
}

export type PointsAnswer = { id: number; points: Points } | { id: number; error: string };

export interface PointsThread {
  read(request: PointsRequest): Promise<Points>;
  close(): Promise<void>;
}

/** A worker does not inherit whatever loads TypeScript in this thread, so it registers the loader itself first. */
const bootstrap = `const { workerData } = require('node:worker_threads');
import(workerData.loader).then(({ register }) => { register(); return import(workerData.entry); })
  .catch((error) => setImmediate(() => { throw error; }));`;

/** Reads chart points on a thread with a read-only connection of its own. The thread is started when first asked. */
export function createPointsThread(databaseFile: string): PointsThread {
  const waiting = new Map<number, { resolve(points: Points): void; reject(error: Error): void }>();
  let worker: Worker | null = null;
  let nextId = 0;

  function start(): Worker {
    // Resolving finds the CommonJS twin, which cannot register; the module beside it can.
    const loader = new URL('./index.mjs', pathToFileURL(createRequire(import.meta.url).resolve('tsx/esm/api'))).href;
    const entry = new URL('./points-worker.ts', import.meta.url).href;
    const started = new Worker(bootstrap, { eval: true, workerData: { databaseFile, loader, entry } });
    started.unref();
    started.on('message', (answer: PointsAnswer) => {
      const asked = waiting.get(answer.id);
      waiting.delete(answer.id);
      if ('points' in answer) asked?.resolve(answer.points);
      else asked?.reject(new Error(answer.error));
    });
    const fail = (error: Error) => {
      if (worker !== started) return;
      // The next question starts a new thread.
      worker = null;
      for (const asked of waiting.values()) asked.reject(error);
      waiting.clear();
    };
    started.on('error', fail);
    started.on('exit', (code) => fail(new Error(`The thread for chart points ended with ${code}`)));
    return started;
  }

  return {
    read(request) {
      const asked = (worker ??= start());
      return new Promise((resolve, reject) => {
        const id = nextId++;
        waiting.set(id, { resolve, reject });
        asked.postMessage({ id, request } satisfies PointsQuestion);
      });
    },
    async close() {
      await worker?.terminate();
    },
  };
}
