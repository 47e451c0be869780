import path from 'node:path';
import type { FleetPlan, FleetSystem } from '#shared/demo/fleet-plan.ts';
import { noFaults } from '../device/faults.ts';
import { stateFile } from '../device/state-file.ts';
import type { WorldClock } from '../device/world-clock.ts';
import { probeChannels, type ProbeChannelName } from '../probe/channels.ts';
import { createProbeDevice, probeStateFile, readProbeState, SAMPLE_EVERY_MS } from '../probe/probe-device.ts';
import { newProbe } from '../probe/step-probe.ts';
import { livePast } from '../pump/past-pump.ts';
import { createPumpDevice, pumpOutbox, pumpStateFile, readPumpState, type PumpDevice } from '../pump/pump-device.ts';
import { newPump } from '../pump/pump-state.ts';
import { trueMlPerCountedMl } from '../pump/true-volume.ts';
import { createDatedWater } from '../water/dated-water.ts';
import { createSimpleWater } from '../water/simple-water.ts';
import { tellProbePast } from './probe-past.ts';

export interface DemoSystem {
  /** Nothing of it was told yet: the whole past comes first. */
  isFirst: boolean;
  /** Resolves when the past is told and the devices are live. */
  live(progress: (share: number) => void): Promise<void>;
  /** The power goes: nobody is told. */
  cut(): void;
}

const MINUTE_MS = 60_000;
const COARSE_MS = 5 * MINUTE_MS;
/** A demo that slept for longer shows a gap. */
const LONGEST_GAP_MS = 3 * 86_400_000;
const KEEP_WATER_EVERY_MS = MINUTE_MS;

/** One system of the demo: its water, and the devices that hang in it. */
export function createDemoSystem(plan: FleetPlan, system: FleetSystem, clock: WorldClock, log: (line: string) => void): DemoSystem {
  const folder = (device: string) => path.join(plan.stateFolder, device);
  const waterFile = stateFile(plan.stateFolder, `water-${system.seed}.json`);
  const keptWater = waterFile.load();
  // The past is told whole before anything is kept, so that an interrupted first start begins again and says the same.
  const isFirst = keptWater === undefined;
  const startMs = clock.nowMs();
  const nearPastMs = startMs - LONGEST_GAP_MS;

  const probeState = system.probe === null || isFirst ? undefined : readProbeState(folder(system.probe.deviceId));
  const fromMs = isFirst ? plan.historyFromMs : Math.max(probeState?.lastMs ?? startMs, nearPastMs);
  const { seed } = system;
  const spec = { ...system, lightsOnUtcH: 9, lightsOffUtcH: 20 };
  const water = createDatedWater(createSimpleWater(spec, fromMs, keptWater), fromMs, 17);
  if (isFirst) for (const { atMs, ...event } of system.events) water.happenAt(atMs, event);

  function devices(id: string) {
    return {
      url: plan.mqttUrl,
      trustAnyCertificate: plan.trustAnyCertificate,
      deviceId: id,
      folder: folder(id),
      clock,
      faults: noFaults(),
      seed,
      log: (line: string) => {
        if (line.includes(':')) log(`${system.name}: ${line}`);
      },
    };
  }

  /** Lets the pump live until now with nobody listening; what it has to say waits in its outbox. */
  function startPump(): PumpDevice | null {
    const { pump } = system;
    if (pump === null) return null;
    const shape = { heads: pump.heads, defaultMlPerSecond: pump.mlPerSecond };
    const kept = isFirst ? undefined : readPumpState(folder(pump.deviceId));
    const state = kept ?? newPump(shape, `demo-${plan.historyFromMs.toString(36)}`, isFirst ? 0 : Math.floor(startMs / 1_000));
    const pumpFromMs = isFirst ? plan.historyFromMs : Math.max(kept?.time.nowMs ?? startMs, nearPastMs);
    const past = livePast(shape, state, pumpFromMs, startMs, isFirst ? pump.schedules : []);
    const outbox = pumpOutbox(folder(pump.deviceId));
    for (const run of past.runs) {
      outbox.push({ word: 'run', payload: JSON.stringify(run) });
      water.happenAt(run.atMs, { kind: 'carbon', ml: run.ml * trueMlPerCountedMl(seed, run.head) });
    }
    outbox.close();
    pumpStateFile(folder(pump.deviceId)).save(past.state);
    return createPumpDevice({
      ...devices(pump.deviceId),
      password: pump.password,
      spec: shape,
      onDelivered: (_, ml, atMs) => water.happenAt(atMs, { kind: 'carbon', ml }),
    });
  }

  let keptMs = 0;
  function keepWater(atMs: number): void {
    if (atMs - keptMs < KEEP_WATER_EVERY_MS) return;
    keptMs = atMs;
    waterFile.save(water.save());
  }

  const pump = startPump();
  const channels = Object.keys(probeChannels).filter(
    (name): name is ProbeChannelName => name in probeChannels && system.probe?.channels.includes(name) === true,
  );
  const probe =
    system.probe === null
      ? null
      : createProbeDevice({ ...devices(system.probe.deviceId), password: system.probe.password, channels, water, onSampled: keepWater });

  return {
    isFirst,
    async live(progress) {
      if (system.probe !== null && probe !== null) {
        const isCoarse = (atMs: number) =>
          isFirst ? atMs < plan.fineFromMs : startMs - fromMs > 2 * COARSE_MS && atMs + COARSE_MS < startMs;
        const everyMs = (atMs: number) => (isCoarse(atMs) ? COARSE_MS : SAMPLE_EVERY_MS);
        const firstMs = Math.ceil((fromMs + 1) / everyMs(fromMs)) * everyMs(fromMs);
        const past = await tellProbePast({
          deviceId: system.probe.deviceId,
          channels,
          state: probeState ?? newProbe(seed),
          water,
          fromMs: firstMs,
          untilMs: () => clock.nowMs(),
          stepMs: everyMs,
          link: probe.link,
          progress: (atMs) => progress((atMs - fromMs) / Math.max(1, clock.nowMs() - fromMs)),
        });
        probeStateFile(folder(system.probe.deviceId)).save(past.state);
        probe.start(past.lastMs);
      }
      await pump?.link.waitUntilLeft(0);
      waterFile.save(water.save());
      progress(1);
    },
    cut() {
      pump?.cut();
      probe?.cut();
    },
  };
}
