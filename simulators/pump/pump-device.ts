import { clearTimeout, setTimeout } from 'node:timers';
import { z } from 'zod';
import { schedulePayloadSchema } from '#shared/mqtt/payloads.ts';
import type { Downlink } from '#shared/mqtt/topics.ts';
import type { Faults } from '../device/faults.ts';
import { createMqttDevice, type MqttDevice } from '../device/mqtt-device.ts';
import { fileOutbox } from '../device/outbox.ts';
import { stateFile } from '../device/state-file.ts';
import type { WorldClock } from '../device/world-clock.ts';
import { randomFrom, seedFor } from '../random.ts';
import { newPump, type PumpMessage, type PumpSpec, type PumpState } from './pump-state.ts';
import { describePump, stepPump, type PumpInput } from './step-pump.ts';
import { trueMlPerCountedMl } from './true-volume.ts';

export interface PumpDeviceOptions {
  spec: PumpSpec;
  url: string;
  deviceId: string;
  password: string;
  trustAnyCertificate?: boolean;
  /** Where the pump keeps its memory and what it has not yet sent. */
  folder: string;
  clock: WorldClock;
  faults: Faults;
  seed: number;
  log(line: string): void;
  /** What really left a head since the last time, mL. */
  onDelivered?(head: number, ml: number, atMs: number): void;
}

export interface PumpDevice {
  link: MqttDevice;
  /** Lets something happen to the pump. Answers why a button did nothing, else null. */
  happen(input: PumpInput): string | null;
  /** An orderly end. */
  close(): Promise<void>;
  /** The plug is pulled: nothing is finished, nobody is told. */
  cut(): void;
}

/** Held loosely: the file is this program's own, and a broken one should stop the start. */
const keptSchema = z.custom<PumpState>((value) => z.object({ origin: z.string(), heads: z.array(z.unknown()) }).safeParse(value).success);

export const pumpStateFile = (folder: string) => stateFile(folder, 'pump.json');
export const pumpOutbox = (folder: string) => fileOutbox(folder, 'outbox.jsonl');

/** What a pump kept; undefined for one that never ran. */
export function readPumpState(folder: string): PumpState | undefined {
  const kept = pumpStateFile(folder).load();
  return kept === undefined ? undefined : keptSchema.parse(kept);
}

/** A pump as a process has it: the step function, driven by a clock, a memory on disk and a connection. */
export function createPumpDevice(options: PumpDeviceOptions): PumpDevice {
  const { spec, clock, faults, log } = options;
  const file = pumpStateFile(options.folder);
  const bootMs = clock.nowMs();
  // A pump without a memory takes its first start for its origin, so that neither its run ids nor its counter repeat earlier ones.
  let state = readPumpState(options.folder) ?? newPump(spec, bootMs.toString(36), Math.floor(bootMs / 1_000));
  const trueMl = new Map(spec.heads.map((head) => [head, trueMlPerCountedMl(options.seed, head)]));
  let timer: NodeJS.Timeout | undefined;
  let isOver = false;

  function time() {
    const nowMs = clock.nowMs();
    const upMs = nowMs - bootMs;
    return faults.isClockUnset ? { nowMs: Math.round(upMs), isSet: false, upMs } : { nowMs: Math.round(nowMs), isSet: true, upMs };
  }

  const stampMs = () => (faults.isClockUnset ? time().nowMs : Date.now());

  const link = createMqttDevice({
    url: options.url,
    deviceId: options.deviceId,
    password: options.password,
    trustAnyCertificate: options.trustAnyCertificate,
    outbox: pumpOutbox(options.folder),
    random: randomFrom(seedFor(options.seed, `reconnect ${bootMs}`)),
    describe: () => describePump(state, stampMs()),
    onMessage: hear,
    log,
  });

  function hear(word: Downlink, payload: unknown): void {
    if (word === 'order') {
      if (faults.isSilent) log('order ignored');
      else happen({ kind: 'order', payload });
      return;
    }
    const schedule = schedulePayloadSchema.nullable().safeParse(payload);
    // A pump keeps what it has rather than run something that it cannot read; its state goes on telling the old version.
    if (!schedule.success) return log('schedule not readable, kept the old one');
    happen({ kind: 'schedule', payload: schedule.data });
    log(`schedule ${schedule.data?.version ?? 'none'}`);
  }

  function happen(input: PumpInput): string | null {
    if (isOver) return 'off';
    clearTimeout(timer);
    const before = state;
    const step = stepPump(spec, state, input, { time: time(), stuckHeads: faults.stuckHeads });
    state = step.state;
    if (changed(before, state)) file.save(state);
    for (const [index, head] of state.heads.entries()) {
      const ml = (head.odometerMl - (before.heads[index]?.odometerMl ?? 0)) * (trueMl.get(head.head) ?? 1);
      if (ml > 0) options.onDelivered?.(head.head, ml, state.time.nowMs);
    }
    for (const message of step.messages) {
      link.send(message.word, message.payload);
      log(sentence(message));
    }
    if (outside(before) !== outside(state)) link.tellState();
    timer = setTimeout(() => happen({ kind: 'tick' }), clock.wallMsFor(step.wakeInMs));
    return step.refused;
  }

  happen({ kind: 'boot' });

  return {
    link,
    happen,
    close() {
      isOver = true;
      clearTimeout(timer);
      return link.close();
    },
    cut() {
      isOver = true;
      clearTimeout(timer);
      link.cut();
    },
  };
}

/** The clocks alone are no reason to write. */
const changed = (before: PumpState, after: PumpState) =>
  JSON.stringify({ ...before, time: null }) !== JSON.stringify({ ...after, time: null });

/** What others see change at once: the state of each head and the schedule obeyed. */
const outside = (state: PumpState) =>
  JSON.stringify([state.schedule?.version, state.heads.map((head) => [head.stopped, head.current !== null])]);

function sentence({ word, payload }: PumpMessage): string {
  if (word === 'receipt') return `receipt ${payload.order} ${payload.outcome}${payload.why === undefined ? '' : ` (${payload.why})`}`;
  return `${payload.phase} ${payload.run} head ${payload.head} ${payload.ml} mL ${payload.cause}${payload.interrupted === true ? ' interrupted' : ''}`;
}
