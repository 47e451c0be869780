import { chmodSync, existsSync, mkdirSync, readFileSync, renameSync, writeFileSync } from 'node:fs';
import path from 'node:path';
import { fleetPlanSchema, type FleetPlan } from '#shared/demo/fleet-plan.ts';
import type { Core } from '../core.ts';
import { keepDemoProgress, takeUpDemo } from './demo-progress.ts';
import { startFleet } from './fleet-process.ts';
import { renewDemoDevices } from './fleet-systems.ts';
import { DEMO_PASSWORD, demoPeople } from './scenario.ts';
import { seedDemo } from './seed-demo.ts';

export interface DemoDeps {
  core: Core;
  /** Where the broker listens; it must be up. */
  mqttUrl: string;
  /** Publishes the schedules that the seed wrote. */
  publishSchedules(): Promise<void>;
  /** One line for whoever watches the start. */
  print(line: string): void;
}

export interface Demo {
  /** False until the devices have told their past. */
  isReady(): boolean;
  /** Resolves then. */
  ready: Promise<void>;
  /** E-mail addresses that sign in with `password`; none where the database is not the demo's. */
  signIns: { password: string; emails: string[] } | null;
  close(): Promise<void>;
}

const DAY_MS = 86_400_000;
const HISTORY_DAYS = 120;
const FINE_DAYS = 2;

/**
 * The demo: on an empty database people, rigs and records of 120 days are written, and a process with all its devices tells the
 * telemetry of that time over MQTT before it goes live. An interrupted start takes up where it was; a later one only goes live.
 */
export async function startDemo(deps: DemoDeps): Promise<Demo> {
  const { core, print } = deps;
  const progress = await takeUpDemo(core);
  if (progress === null) {
    print('This data directory was begun without the demo: nothing is added to it.');
    return { isReady: () => true, ready: Promise.resolve(), signIns: null, close: () => Promise.resolve() };
  }

  const { anchorMs } = progress;
  const folder = path.join(path.resolve(core.config.DATA_DIR), 'demo');
  const planFile = path.join(folder, 'fleet.json');
  const toSeed = progress.stage === 'seeding';
  if (toSeed) print('Demo: writing people, rigs and 120 days of records');
  const plan = toSeed ? await firstPlan(core, anchorMs) : (readPlan(planFile) ?? (await renewedPlan(core, anchorMs)));
  await deps.publishSchedules();
  writePlan(planFile, {
    ...plan,
    mqttUrl: deps.mqttUrl,
    trustAnyCertificate: deps.mqttUrl.startsWith('mqtts:') && core.config.MQTT_URL === undefined,
    stateFolder: path.join(folder, 'devices'),
  });

  const fleet = startFleet(planFile, print);
  let isReady = !toSeed;
  const told = fleet.ready.then(async () => {
    if (toSeed) await keepDemoProgress(core, { anchorMs, stage: 'live' });
    isReady = true;
  });
  return {
    isReady: () => isReady,
    ready: toSeed ? told : Promise.resolve(),
    signIns: { password: DEMO_PASSWORD, emails: Object.values(demoPeople).map((person) => person.email) },
    close: () => fleet.close(),
  };
}

type Past = Pick<FleetPlan, 'historyFromMs' | 'fineFromMs' | 'systems'>;

async function firstPlan(core: Core, anchorMs: number): Promise<Past> {
  const systems = await seedDemo(core, anchorMs);
  return { historyFromMs: anchorMs - HISTORY_DAYS * DAY_MS, fineFromMs: anchorMs - FINE_DAYS * DAY_MS, systems };
}

/** Nobody kept what the devices have told, so they tell nothing but the present. */
async function renewedPlan(core: Core, anchorMs: number): Promise<Past> {
  const nowMs = core.clock.nowMs();
  return { historyFromMs: nowMs, fineFromMs: nowMs, systems: await renewDemoDevices(core, anchorMs) };
}

function readPlan(file: string): FleetPlan | null {
  return existsSync(file) ? fleetPlanSchema.parse(JSON.parse(readFileSync(file, 'utf8'))) : null;
}

/** The plan holds passwords: only this user may read it. */
function writePlan(file: string, plan: FleetPlan): void {
  mkdirSync(path.dirname(file), { recursive: true, mode: 0o700 });
  writeFileSync(`${file}.new`, JSON.stringify(plan), { mode: 0o600 });
  chmodSync(`${file}.new`, 0o600);
  renameSync(`${file}.new`, file);
}
