import { type ChildProcess, spawn } from 'node:child_process';
import { mkdtempSync, rmSync, writeFileSync } from 'node:fs';
import { tmpdir } from 'node:os';
import path from 'node:path';
import { createInterface } from 'node:readline';
import { afterAll, afterEach, beforeAll, describe, expect, it } from 'vitest';
import { FLEET_READY_LINE, type FleetPlan } from '#shared/demo/fleet-plan.ts';
import type { SchedulePayload } from '#shared/mqtt/payloads.ts';
import { eventually } from '../helpers/eventually.ts';
import { startTestServer, type Household, type TestServer } from '../helpers/server.ts';

const HOUR_MS = 3_600_000;
const SLOW_MS = 25_000;

describe('the demo devices', () => {
  let server: TestServer;
  let house: Household;
  let folder: string;
  let plan: FleetPlan;
  const startedMs = Date.now();
  const historyFromMs = Math.floor(startedMs / 1_000) * 1_000 - 24 * HOUR_MS;
  let fleets: { child: ChildProcess; ended: Promise<unknown> }[] = [];

  beforeAll(async () => {
    server = await startTestServer();
    house = await server.household();
    folder = mkdtempSync(path.join(tmpdir(), 'steadfall-fleet-'));
    const device = async (kind: 'pump' | 'probe') => {
      const { systemId, owner } = house;
      const { device: made, credentials } = await owner.api('createDevice', { params: { systemId }, body: { name: kind, kind } });
      return { deviceId: made.id, password: credentials.password ?? '' };
    };
    // A slot each hour, half an hour off the present, so that none falls into the test.
    const offMin = (Math.floor(startedMs / 60_000) + 30) % 60;
    const payload: SchedulePayload = {
      version: 1,
      heads: [
        {
          head: 1,
          enabled: true,
          slotMl: 0.5,
          slotsUtcMin: Array.from({ length: 24 }, (_, hour) => hour * 60 + offMin),
          mlPerSecond: 1,
          maxMlPerRun: 1,
          maxMlPerHour: 2,
          maxMlPerDay: 20,
        },
      ],
    };
    plan = {
      mqttUrl: server.mqttUrl,
      trustAnyCertificate: false,
      stateFolder: path.join(folder, 'devices'),
      historyFromMs,
      fineFromMs: startedMs - HOUR_MS,
      systems: [
        {
          name: 'Somewhere',
          seed: 1,
          netLitres: 400,
          temperatureC: 25,
          nitrateMgPerL: 20,
          phosphateMgPerL: 0.2,
          carbonMgPerMl: 164.6,
          bottleMl: 500,
          events: [{ kind: 'refill', atMs: startedMs - 3 * HOUR_MS, ml: 400 }],
          pump: { ...(await device('pump')), heads: [1], mlPerSecond: 1, schedules: [{ fromMs: historyFromMs + 1_000, payload }] },
          probe: { ...(await device('probe')), channels: ['temperature', 'level'] },
        },
      ],
    };
    writeFileSync(path.join(folder, 'plan.json'), JSON.stringify(plan));
  });
  afterEach(async () => {
    for (const fleet of fleets) fleet.child.kill('SIGKILL');
    await Promise.all(fleets.map((fleet) => fleet.ended));
    fleets = [];
  });
  afterAll(async () => {
    await server.close();
    rmSync(folder, { recursive: true, force: true });
  });

  function start() {
    const child = spawn(process.execPath, ['--import', 'tsx', 'simulators/demo-fleet.ts', path.join(folder, 'plan.json')], {
      stdio: ['pipe', 'pipe', 'inherit'],
    });
    const lines: string[] = [];
    createInterface({ input: child.stdout }).on('line', (line) => lines.push(line));
    const ended = new Promise((resolve) => child.once('close', resolve));
    const fleet = { child, lines, ended, ready: () => eventually(() => lines.includes(FLEET_READY_LINE), 'ready', SLOW_MS) };
    fleets.push(fleet);
    return fleet;
  }
  const samples = (channel: string) =>
    server.core.reader
      .selectFrom('sample')
      .innerJoin('series', 'series.key', 'sample.seriesKey')
      .select(['sample.tMs', 'sample.value'])
      .where('series.channel', '=', channel)
      .orderBy('sample.tMs')
      .execute();
  const runs = () => server.core.reader.selectFrom('run').selectAll().orderBy('begunMs').execute();
  const conflicts = () => server.core.reader.selectFrom('sampleConflict').select('seriesKey').execute();
  const rejects = () => server.core.reader.selectFrom('reject').selectAll().execute();

  it('begin again after an interruption and say the same, then tell all of their past and live on', async () => {
    const broken = start();
    await eventually(async () => (await samples('temperature')).length > 0, 'the first of the past', SLOW_MS);
    broken.child.kill('SIGKILL');
    await broken.ended;

    await start().ready();
    const temperatures = await samples('temperature');
    // A day at 5 min but for its last hour at 10 s, which begins with the first full 5 min in it.
    expect(temperatures.length).toBeGreaterThanOrEqual(23 * 12 + 330);
    expect((temperatures[0]?.tMs ?? 0) - historyFromMs).toBeLessThanOrEqual(300_000);
    expect(await conflicts()).toEqual([]);
    expect(await rejects()).toEqual([]);

    const given = await runs();
    expect(given).toHaveLength(24);
    expect(given.every((run) => run.ml === 0.5 && run.flags === '[]' && run.endedMs !== null && run.dueMs === run.begunMs)).toBe(true);
    const levels = await samples('level:bottle');
    expect(levels.find((one) => one.tMs > startedMs - 3 * HOUR_MS + 600_000)?.value).toBeCloseTo(400, -1);
    expect(levels[0]?.value).toBeCloseTo(500, -1);

    await eventually(async () => (await samples('temperature')).length > temperatures.length, 'a live sample', 15_000);
  }, 90_000);

  it('fill the gap at a later start, without a word of the past a second time', async () => {
    const before = (await samples('temperature')).length;
    const fleet = start();
    await fleet.ready();
    await eventually(async () => (await samples('temperature')).length > before + 1, 'two more samples', SLOW_MS);
    const all = await samples('temperature');
    const recent = all.filter((one) => one.tMs > startedMs - HOUR_MS / 2);
    const gaps = recent.slice(1).map((one, index) => one.tMs - (recent[index]?.tMs ?? 0));
    expect(Math.max(...gaps)).toBe(10_000);
    expect(await conflicts()).toEqual([]);
    expect(fleet.lines).toEqual([FLEET_READY_LINE]);
  }, 60_000);

  it('end when whoever started them is gone', async () => {
    const fleet = start();
    await fleet.ready();
    fleet.child.stdin?.end();
    expect(await fleet.ended).toBe(0);
  }, 60_000);
});
