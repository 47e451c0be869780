import { type ChildProcessWithoutNullStreams, spawn } from 'node:child_process';
import { once } from 'node:events';
import { mkdirSync, mkdtempSync, rmSync } from 'node:fs';
import path from 'node:path';
import { createInterface } from 'node:readline';
import { fileURLToPath } from 'node:url';
import { build } from 'vite';

const entry = fileURLToPath(new URL('./crash-child.ts', import.meta.url));
/** Below the packages, so that what is built finds them. */
const cacheFolder = fileURLToPath(new URL('../../node_modules/.cache/', import.meta.url));

export interface CrashServer {
  /** Resolves when its code is loaded and it waits to be told. */
  loaded: Promise<unknown>;
  /** Opens the database and listens; null when it was killed before it did. */
  serve(folder: string, build: 'right' | 'acknowledges-first'): Promise<number | null>;
  kill(): Promise<void>;
}

export interface CrashServers {
  /** Starts a process that loads its code at once and serves when told, so that the next one is ready when one is killed. */
  start(): CrashServer;
  close(): void;
}

/** Builds the server to be killed into one file: compiling it anew for each of many starts would take minutes. */
export async function buildCrashServers(): Promise<CrashServers> {
  mkdirSync(cacheFolder, { recursive: true });
  const outDir = mkdtempSync(path.join(cacheFolder, 'crash-server-'));
  await build({ configFile: false, logLevel: 'error', build: { ssr: entry, outDir, minify: false, target: 'node20' } });
  return {
    start: () => start(path.join(outDir, 'crash-child.js')),
    close: () => rmSync(outDir, { recursive: true }),
  };
}

function start(file: string): CrashServer {
  const child: ChildProcessWithoutNullStreams = spawn(process.execPath, [file]);
  const lines = createInterface({ input: child.stdout })[Symbol.asyncIterator]();
  const loaded = lines.next();
  let complaint = '';
  child.stderr.on('data', (data: Buffer) => (complaint += data.toString('utf8')));
  const exited = once(child, 'exit');
  let isKilled = false;

  return {
    loaded,
    async serve(folder, which) {
      await loaded;
      child.stdin.write(JSON.stringify({ folder, build: which }));
      const { value, done } = await lines.next();
      if (done !== true) return Number(value);
      if (!isKilled) throw new Error(`The server ended by itself: ${complaint}`);
      return null;
    },
    async kill() {
      isKilled = true;
      child.kill('SIGKILL');
      await exited;
    },
  };
}
