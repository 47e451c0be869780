import type { MqttDevice } from '../device/mqtt-device.ts';
import type { ProbeChannelName } from '../probe/channels.ts';
import { senmlPack, type ProbeSample } from '../probe/pack.ts';
import { stepProbe, type ProbeState } from '../probe/step-probe.ts';
import type { Water } from '../water/water.ts';

export interface ProbePast {
  deviceId: string;
  channels: readonly ProbeChannelName[];
  state: ProbeState;
  water: Water;
  fromMs: number;
  /** When to stop; asked again and again, since the present moves on meanwhile. */
  untilMs(): number;
  /** From one sample to the next, by the time of the first. */
  stepMs(atMs: number): number;
  link: Pick<MqttDevice, 'send' | 'waitUntilLeft'>;
  progress(atMs: number): void;
}

/** About 40 bytes a record keeps a pack of a thousand well under 60 KB. */
const RECORDS_A_PACK = 1_000;
const PACKS_AHEAD = 6;

/** Lets a probe set live through the past and sends what it saw, in packs with their own times. Resolves once all is acknowledged. */
export async function tellProbePast(past: ProbePast): Promise<{ state: ProbeState; lastMs: number }> {
  const { deviceId, channels, water, link } = past;
  const samplesAPack = Math.max(1, Math.floor(RECORDS_A_PACK / channels.length));
  let { state } = past;
  let samples: ProbeSample[] = [];
  let atMs = past.fromMs;
  for (; atMs <= past.untilMs(); atMs += past.stepMs(atMs)) {
    water.advanceTo(atMs);
    const step = stepProbe(state, channels, atMs, water.read());
    state = step.state;
    samples.push({ atMs, values: step.values });
    if (samples.length < samplesAPack) continue;
    link.send('senml', senmlPack(deviceId, samples));
    samples = [];
    past.progress(atMs);
    await link.waitUntilLeft(PACKS_AHEAD);
  }
  if (samples.length > 0) link.send('senml', senmlPack(deviceId, samples));
  await link.waitUntilLeft(0);
  return { state, lastMs: state.lastMs ?? past.fromMs };
}
