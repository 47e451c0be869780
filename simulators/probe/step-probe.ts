import { randomFrom } from '../random.ts';
import type { WaterReading } from '../water/water.ts';
import { probeChannels, type ProbeChannelName } from './channels.ts';

/** What a probe set keeps through a restart: where its noise stands, how far it drifted, and what it last settled on. */
export interface ProbeState {
  randomState: number;
  lastMs: number | null;
  channels: Partial<Record<ProbeChannelName, { settled: number; drift: number }>>;
}

export interface ProbeValue {
  channel: ProbeChannelName;
  /** In the unit of the channel. */
  value: number;
}

const WEEK_S = 7 * 86_400;

export function newProbe(seed: number): ProbeState {
  return { randomState: seed >>> 0, lastMs: null, channels: {} };
}

/**
 * Reads every channel once: the water through the probe's time constant, plus a drift that walks at random, plus noise.
 * Exact for any spacing of the samples. Changes nothing that it is given.
 */
export function stepProbe(
  before: ProbeState,
  channels: readonly ProbeChannelName[],
  nowMs: number,
  water: WaterReading,
): { state: ProbeState; values: ProbeValue[] } {
  const random = randomFrom(before.randomState);
  const sinceS = before.lastMs === null ? 0 : Math.max(0, (nowMs - before.lastMs) / 1_000);
  const next: ProbeState['channels'] = {};
  const values = channels.map((name) => {
    const channel = probeChannels[name];
    const truth = channel.read(water);
    const { settled: from, drift } = before.channels[name] ?? { settled: truth, drift: 0 };
    const settled = from + (truth - from) * (1 - Math.exp(-sinceS / channel.timeConstantS));
    const drifted = drift + channel.driftPerWeek * Math.sqrt(sinceS / WEEK_S) * random.gauss();
    next[name] = { settled, drift: drifted };
    const seen = (settled + drifted + channel.noise * random.gauss()) * channel.perUnit;
    const scale = 10 ** channel.decimals;
    return { channel: name, value: Math.max(0, Math.round(seen * scale) / scale) };
  });
  return { state: { randomState: random.state, lastMs: nowMs, channels: next }, values };
}
