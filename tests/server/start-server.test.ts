import { mkdtempSync, rmSync } from 'node:fs';
import { createServer } from 'node:net';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { spawn } from 'node:child_process';
import { once } from 'node:events';
import { afterEach, beforeEach, describe, expect, it } from 'vitest';
import { startTestServer } from '../helpers/server.ts';

let folder: string;

beforeEach(() => {
  folder = mkdtempSync(path.join(tmpdir(), 'steadfall-start-'));
});

afterEach(() => rmSync(folder, { recursive: true, force: true }));

it('keeps sessions and what was written over a restart', async () => {
  const first = await startTestServer({ folder });
  const { owner, systemId } = await first.household();
  await first.close();
  const second = await startTestServer({ folder });
  const system = await second.api(owner.token)('getSystem', { params: { systemId } });
  expect(system.name).toBe('Front window');
  await second.close();
});

it('runs beside another with other ports and another folder', async () => {
  const [one, other] = [await startTestServer(), await startTestServer()];
  const { owner } = await one.household();
  expect((await other.api(owner.token).raw('me')).status).toBe(401);
  await one.close();
  expect((await fetch(`${other.url}/api/health`)).status).toBe(200);
  await other.close();
});

it('closes what it had opened when a port is taken', async () => {
  const taken = createServer().listen(0, '127.0.0.1');
  await once(taken, 'listening');
  const address = taken.address();
  const port = typeof address === 'object' && address !== null ? String(address.port) : '';
  await expect(startTestServer({ folder, environment: { PORT: port } })).rejects.toMatchObject({ code: 'EADDRINUSE' });
  taken.close();
  const server = await startTestServer({ folder });
  expect((await fetch(`${server.url}/api/ready`)).status).toBe(200);
  await server.close();
});

it('refuses connections once it is closed', async () => {
  const server = await startTestServer({ folder });
  const { url } = server;
  await server.close();
  await expect(fetch(`${url}/api/health`)).rejects.toThrow();
});

describe('the process', () => {
  function run(environment: Record<string, string>) {
    const child = spawn(process.execPath, ['--import', 'tsx', 'server/main.ts'], { env: { ...process.env, ...environment } });
    let output = '';
    for (const stream of [child.stdout, child.stderr]) stream.on('data', (part: Buffer) => (output += part.toString()));
    const exit = once(child, 'close') as Promise<[number | null, string | null]>;
    return { child, exit, output: () => output };
  }

  it('stops with one line for each bad value', async () => {
    const { exit, output } = run({ PORT: 'many', DEMO: 'yes', TLS_CERT: 'cert.pem' });
    expect((await exit)[0]).toBe(1);
    const lines = output().trim().split('\n');
    expect(lines.map((line) => line.split(':')[0])).toEqual(['PORT', 'DEMO', 'TLS_KEY']);
  });

  it.each(['SIGINT', 'SIGTERM'] as const)('prints how to get in, and ends with 0 on %s', async (signal) => {
    const { child, exit, output } = run({ PORT: '0', MQTT_PORT: '0', DATA_DIR: folder, DEMO: '0' });
    await expect.poll(output, { timeout: 25_000 }).toMatch(/with the code [\w-]{14}/);
    expect(output()).toMatch(/ready: http:\/\/127\.0\.0\.1:\d+/);
    expect(output()).toMatch(/mqtt:\/\/127\.0\.0\.1:\d+/);
    child.kill(signal);
    child.kill(signal);
    expect(await exit).toEqual([0, null]);
  });
});
