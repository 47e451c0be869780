import { type ChildProcess, spawn } from 'node:child_process';
import { mkdtempSync, rmSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { createInterface } from 'node:readline';
import { afterAll, afterEach, beforeAll, describe, expect, it } from 'vitest';
import { eventually } from '../helpers/eventually.ts';
import { startTestServer, type Household, type TestServer } from '../helpers/server.ts';

const SLOW_START_MS = 25_000;

/** `npm run simulate` as a process of its own, with every line that it printed. */
function simulate(...parameters: string[]) {
  const child: ChildProcess = spawn(process.execPath, ['--import', 'tsx', 'simulators/main.ts', ...parameters], {
    stdio: ['pipe', 'pipe', 'pipe'],
  });
  const lines: string[] = [];
  for (const stream of [child.stdout, child.stderr])
    if (stream !== null) createInterface({ input: stream }).on('line', (line) => lines.push(line));
  const ended = new Promise<number | null>((resolve) => child.once('close', resolve));
  return {
    child,
    lines,
    ended,
    type: (line: string) => child.stdin?.write(`${line}\n`),
    says: (part: string, withinMs = 10_000) =>
      eventually(() => lines.some((line) => line.includes(part)), `"${part}" among\n${lines.join('\n')}`, withinMs),
  };
}

describe('the simulators as processes', () => {
  let server: TestServer;
  let house: Household;
  let folder: string;
  let running: ReturnType<typeof simulate>[] = [];
  beforeAll(async () => {
    server = await startTestServer();
    house = await server.household();
    folder = mkdtempSync(path.join(tmpdir(), 'steadfall-simulate-'));
  });
  afterEach(async () => {
    for (const one of running) one.child.kill('SIGKILL');
    await Promise.all(running.map((one) => one.ended));
    running = [];
  });
  afterAll(async () => {
    await server.close();
    rmSync(folder, { recursive: true, force: true });
  });

  async function device(kind: 'pump' | 'probe', ...more: string[]) {
    const { owner, systemId } = house;
    const { device: made, credentials } = await owner.api('createDevice', { params: { systemId }, body: { name: kind, kind } });
    const start = () => {
      const one = simulate(
        ...['--url', server.mqttUrl, '--device', made.id, '--password', credentials.password ?? '', '--kind', kind],
        ...['--state', path.join(folder, made.id), ...more],
      );
      running.push(one);
      return one;
    };
    const state = async () => (await owner.api('listDevices', { params: { systemId } })).items.find((one) => one.id === made.id)?.state;
    return { id: made.id, start, state };
  }

  it('a pump gets its schedule, doses at the button, overruns when its relay sticks, and obeys a stop', async () => {
    const { owner, systemId } = house;
    const pump = await device('pump');
    const { id: headId } = await owner.api('createHead', {
      params: { systemId },
      body: { deviceId: pump.id, head: 1, kind: 'other', mlPerSecond: 2, smallestMl: 0.1 },
    });
    // Due in half a day, so that no slot falls into the test.
    const dueMin = (Math.floor(Date.now() / 60_000) + 720) % 1440;
    await owner.api('putSchedule', {
      params: { systemId },
      body: { heads: [{ headId, mlPerDay: 1, slotsUtcMin: [dueMin] }], confirmUnknownCeiling: true },
    });
    const process = pump.start();
    await process.says('schedule ', SLOW_START_MS);
    process.type('dose 0.5');
    await process.says('ended ');
    const runs = async () => (await owner.api('listRuns', { params: { systemId } })).items.filter((one) => one.deviceId === pump.id);
    await eventually(async () => (await runs()).some((one) => one.ml === 0.5 && one.endedAt !== null), 'the run in the database');

    process.type('stick 1');
    process.type('dose 0.1');
    await process.says('running ');
    const stopped = await owner.api('stop', { params: { systemId }, body: { heads: [headId] } });
    expect(stopped.orders.map((order) => order.outcome)).toEqual(['done']);
    await eventually(async () => (await pump.state())?.heads[0]?.state === 'stopped', 'the pump says that it is stopped');
    expect((await runs()).some((one) => one.ml > 1 && one.endedAt !== null)).toBe(true);

    // The plug is pulled: it comes back stopped, and proves the schedule that stops it.
    process.child.kill('SIGKILL');
    await process.ended;
    const again = pump.start();
    await again.says('connected', SLOW_START_MS);
    await eventually(async () => (await pump.state())?.online === true, 'it is back');
    expect((await pump.state())?.heads[0]?.state).toBe('stopped');
    again.type('dose 0.1');
    await again.says('refused (stopped)');
  });

  it('a probe set is measured by every channel, and says goodbye', async () => {
    const { owner, systemId } = house;
    const probe = await device('probe');
    const process = probe.start();
    const series = async () => (await owner.api('listSeries', { params: { systemId } })).items.filter((one) => one.deviceId === probe.id);
    await eventually(async () => (await series()).length === 7, 'seven series', SLOW_START_MS + 10_000);
    const quantities = (await series()).map((one) => one.quantity).sort();
    expect(quantities).toEqual(['conductivity', 'level', 'orp', 'oxygen', 'ph', 'power', 'temperature']);
    process.child.kill('SIGTERM');
    expect(await process.ended).toBe(0);
    await eventually(async () => (await probe.state())?.online === false, 'it is offline');
  }, 60_000);

  it('a probe set that starts in the past uploads late, with its own times', async () => {
    const { owner, systemId } = house;
    const fromMs = Date.now() - 3_600_000;
    const probe = await device('probe', '--channels', 'temperature', '--from', new Date(fromMs).toISOString(), '--speed', '10000');
    probe.start();
    const series = async () => (await owner.api('listSeries', { params: { systemId } })).items.find((one) => one.deviceId === probe.id);
    await eventually(async () => ((await series())?.lastT ?? 0) > Date.now() - 30_000, 'it has caught up', SLOW_START_MS + 10_000);
    const { id: seriesId } = (await series()) ?? { id: '' };
    const range = { from: new Date(fromMs).toISOString(), to: new Date(Date.now() + 60_000).toISOString(), points: 5000 };
    const points = await owner.api('getPoints', { params: { seriesId }, query: range });
    expect(points.t.length).toBeGreaterThanOrEqual(358);
    expect((points.t[0] ?? 0) - fromMs).toBeLessThan(10_001);
  }, 60_000);

  it('tells what is wrong with its options', async () => {
    const process = simulate('--kind', 'kettle');
    running.push(process);
    expect(await process.ended).toBe(1);
    expect(process.lines.join('\n')).toContain('--device');
    expect(process.lines.join('\n')).toContain('--kind');
  });

  it('prints its help', async () => {
    const process = simulate('--help');
    running.push(process);
    expect(await process.ended).toBe(0);
    for (const word of ['--scenario', 'relay-stuck-on', 'offline SECONDS']) expect(process.lines.join('\n')).toContain(word);
  });
});
