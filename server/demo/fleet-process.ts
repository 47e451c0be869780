import { spawn, type ChildProcess } from 'node:child_process';
import { clearTimeout, setTimeout } from 'node:timers';
import path from 'node:path';
import { createInterface } from 'node:readline';
import { fileURLToPath } from 'node:url';
import { FLEET_READY_LINE } from '#shared/demo/fleet-plan.ts';

export interface FleetProcess {
  /** Resolves once the devices have told their past and are live. */
  ready: Promise<void>;
  close(): Promise<void>;
}

const root = path.join(path.dirname(fileURLToPath(import.meta.url)), '..', '..');
const RESTART_AFTER_MS = 3_000;
const PATIENCE_MS = 4_000;

/**
 * Runs the demo's devices as a process of their own, so that they are as far from the server as real ones, and starts it again
 * when it dies. The child ends by itself when this process is gone: its standard input closes then.
 */
export function startFleet(planFile: string, print: (line: string) => void): FleetProcess {
  let child: ChildProcess | null = null;
  let isClosing = false;
  let restart: NodeJS.Timeout | undefined;
  let tellReady: () => void = () => undefined;
  const ready = new Promise<void>((resolve) => (tellReady = resolve));

  function start(): void {
    const mine = spawn(process.execPath, ['--import', 'tsx', path.join('simulators', 'demo-fleet.ts'), planFile], {
      cwd: root,
      stdio: ['pipe', 'pipe', 'inherit'],
    });
    child = mine;
    createInterface({ input: mine.stdout }).on('line', (line) => {
      if (line === FLEET_READY_LINE) tellReady();
      else print(`demo devices: ${line}`);
    });
    mine.on('error', (error) => print(`demo devices: ${error.message}`));
    mine.on('close', (code, signal) => {
      child = null;
      if (isClosing) return;
      print(`demo devices ended (${signal ?? code}) and are started again`);
      restart = setTimeout(start, RESTART_AFTER_MS);
    });
  }
  start();

  return {
    ready,
    close() {
      isClosing = true;
      clearTimeout(restart);
      const mine = child;
      if (mine === null) return Promise.resolve();
      return new Promise((resolve) => {
        const kill = setTimeout(() => mine.kill('SIGKILL'), PATIENCE_MS);
        mine.once('close', () => {
          clearTimeout(kill);
          resolve();
        });
        mine.kill('SIGTERM');
      });
    },
  };
}
