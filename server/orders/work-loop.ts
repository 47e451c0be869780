import type { Logger } from 'pino';
import type { Writer } from '../db/writer.ts';

/** Work that is found in rows: done after a commit that asked for it, and now and then in case nobody asked. */
export interface WorkLoop {
  /** Asks for a run after the next commit. Called inside a unit: if that unit is rolled back, the run finds nothing. */
  request(): void;
  /** Resolves when a run that began after this call is over. */
  run(): Promise<void>;
  close(): Promise<void>;
}

export interface WorkLoopOptions {
  name: string;
  writer: Writer;
  log: Logger;
  everyMs: number;
  /** Never runs twice at once. What it throws is logged, and tried again at the next run. */
  work: () => Promise<void>;
}

export function createWorkLoop({ name, writer, log, everyMs, work }: WorkLoopOptions): WorkLoop {
  let isRequested = false;
  let isClosed = false;
  let current: Promise<void> | null = null;
  let following: Promise<void> | null = null;

  async function execute(): Promise<void> {
    try {
      await work();
    } catch (error) {
      log.error({ error }, `${name} failed, and is tried again`);
    } finally {
      current = null;
    }
  }

  function run(): Promise<void> {
    if (isClosed) return Promise.resolve();
    if (current === null) return (current = execute());
    following ??= current.then(() => {
      following = null;
      return (current = execute());
    });
    return following;
  }

  const unsubscribe = writer.onCommitted(() => {
    if (!isRequested) return;
    isRequested = false;
    void run();
  });
  const timer = setInterval(() => void run(), everyMs);
  timer.unref();

  return {
    request: () => (isRequested = true),
    run,
    async close() {
      isClosed = true;
      clearInterval(timer);
      unsubscribe();
      await (following ?? current);
    },
  };
}
