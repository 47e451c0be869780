import { type ChildProcess, spawn } from 'node:child_process';
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { createInterface } from 'node:readline';

export interface DeviceProcess {
  /** Types a line at the device, such as `dose 1.5`. */
  type(line: string): void;
  /** Pulls the plug: nothing is said and nothing is saved beyond what the device saved already. */
  kill(): Promise<void>;
  close(): Promise<void>;
}

export interface DeviceProcessOptions {
  mqttPort: number;
  username: string;
  password: string;
  kind: 'pump' | 'probe';
  /** The device's memory, kept over processes when given. */
  stateFolder?: string;
}

function ended(child: ChildProcess): Promise<void> {
  if (child.exitCode !== null || child.signalCode !== null) return Promise.resolve();
  return new Promise((resolve) => child.once('exit', () => resolve()));
}

/** A simulated device as a process of its own, over a real socket with real credentials. Its output is shown when it fails. */
export function startDeviceProcess(options: DeviceProcessOptions): DeviceProcess {
  const folder = options.stateFolder ?? mkdtempSync(path.join(tmpdir(), 'steadfall-device-'));
  const child = spawn(
    process.execPath,
    [
      ...['--import', 'tsx', 'simulators/main.ts', '--url', `mqtt://127.0.0.1:${options.mqttPort}`],
      ...['--device', options.username, '--password', options.password, '--kind', options.kind, '--state', folder],
    ],
    { stdio: ['pipe', 'pipe', 'inherit'] },
  );
  const lines: string[] = [];
  createInterface({ input: child.stdout }).on('line', (line) => lines.push(line));
  child.once('exit', (code) => {
    if (code !== null && code !== 0) console.error(`device process ended with ${code}\n${lines.slice(-20).join('\n')}`);
  });
  return {
    type: (line) => void child.stdin.write(`${line}\n`),
    async kill() {
      child.kill('SIGKILL');
      await ended(child);
    },
    async close() {
      child.kill('SIGTERM');
      await ended(child);
      if (options.stateFolder === undefined) rmSync(folder, { recursive: true, force: true });
    },
  };
}
