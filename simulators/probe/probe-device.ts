import { clearTimeout, setTimeout } from 'node:timers';
import { z } from 'zod';
import type { Faults } from '../device/faults.ts';
import { createMqttDevice, type MqttDevice } from '../device/mqtt-device.ts';
import { fileOutbox } from '../device/outbox.ts';
import { stateFile } from '../device/state-file.ts';
import type { WorldClock } from '../device/world-clock.ts';
import { randomFrom, seedFor } from '../random.ts';
import type { Water } from '../water/water.ts';
import type { ProbeChannelName } from './channels.ts';
import { senmlPack, undatedPack } from './pack.ts';
import { newProbe, stepProbe, type ProbeState } from './step-probe.ts';

export interface ProbeDeviceOptions {
  channels: readonly ProbeChannelName[];
  url: string;
  deviceId: string;
  password: string;
  trustAnyCertificate?: boolean;
  folder: string;
  clock: WorldClock;
  faults: Faults;
  seed: number;
  water: Water;
  log(line: string): void;
  onSampled?(atMs: number): void;
}

export interface ProbeDevice {
  link: MqttDevice;
  /** Goes on from what the probe kept, and samples from the next full ten seconds after `fromMs` on (the present). */
  start(fromMs?: number): void;
  close(): Promise<void>;
  cut(): void;
}

export const SAMPLE_EVERY_MS = 10_000;

/** What a probe set kept; undefined for one that never ran. */
export function readProbeState(folder: string): ProbeState | undefined {
  const kept = probeStateFile(folder).load();
  return kept === undefined ? undefined : keptSchema.parse(kept);
}

const keptSchema = z.custom<ProbeState>((value) => z.object({ randomState: z.number(), channels: z.object() }).safeParse(value).success);

export const probeStateFile = (folder: string) => stateFile(folder, 'probe.json');

/** A probe set as a process has it: reads the water each ten seconds, on the full ten seconds, and sends one pack each time. */
export function createProbeDevice(options: ProbeDeviceOptions): ProbeDevice {
  const { clock, faults, water, deviceId } = options;
  const file = probeStateFile(options.folder);
  let state = newProbe(options.seed);
  let isUp = false;
  let timer: NodeJS.Timeout | undefined;
  const bootMs = Date.now();

  const link = createMqttDevice({
    url: options.url,
    deviceId,
    password: options.password,
    trustAnyCertificate: options.trustAnyCertificate,
    outbox: fileOutbox(options.folder, 'outbox.jsonl'),
    random: randomFrom(seedFor(options.seed, `reconnect ${bootMs}`)),
    describe: () => ({ online: true, atMs: faults.isClockUnset ? Date.now() - bootMs : Date.now() }),
    onMessage: () => undefined,
    log(line) {
      isUp = line === 'connected' || (isUp && line !== 'disconnected');
      options.log(line);
    },
  });

  let dueMs = 0;
  function sampleWhatIsDue(): void {
    for (; dueMs <= clock.nowMs(); dueMs += SAMPLE_EVERY_MS) sample(dueMs);
    timer = setTimeout(sampleWhatIsDue, Math.max(1, clock.wallMsFor(dueMs - clock.nowMs())));
  }

  function sample(atMs: number): void {
    water.advanceTo(atMs);
    const step = stepProbe(state, options.channels, atMs, water.read());
    state = step.state;
    file.save(state);
    options.onSampled?.(atMs);
    if (!faults.isClockUnset) link.send('senml', senmlPack(deviceId, [{ atMs, values: step.values }]));
    // Readings that cannot be dated are worth nothing later.
    else if (isUp) link.send('senml', undatedPack(deviceId, step.values));
  }

  return {
    link,
    start(fromMs = clock.nowMs()) {
      state = readProbeState(options.folder) ?? state;
      dueMs = Math.ceil((fromMs + 1) / SAMPLE_EVERY_MS) * SAMPLE_EVERY_MS;
      sampleWhatIsDue();
    },
    close() {
      clearTimeout(timer);
      return link.close();
    },
    cut() {
      clearTimeout(timer);
      link.cut();
    },
  };
}
