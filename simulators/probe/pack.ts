import { probeChannels } from './channels.ts';
import type { ProbeValue } from './step-probe.ts';

export interface ProbeSample {
  atMs: number;
  values: ProbeValue[];
}

export interface SenmlRecord {
  bn?: string;
  bt?: number;
  n: string;
  u: string;
  t?: number;
  v: number;
}

/**
 * Several samples as one SenML JSON pack (RFC 8428): base name and base time stand in the first record, and every record's time
 * is relative to it. Example: a sample of 26.1 degC at 1767225600000 becomes
 * `[{"bn":"pr1:","bt":1767225600,"n":"temperature","u":"Cel","v":26.1}]`.
 */
export function senmlPack(deviceId: string, samples: readonly ProbeSample[]): SenmlRecord[] {
  const baseMs = samples[0]?.atMs ?? 0;
  const records = samples.flatMap(({ atMs, values }) =>
    values.map(({ channel, value }): SenmlRecord => {
      const { name, unit } = probeChannels[channel];
      return atMs === baseMs ? { n: name, u: unit, v: value } : { n: name, u: unit, t: (atMs - baseMs) / 1_000, v: value };
    }),
  );
  return records.map((record, index) => (index === 0 ? { bn: `${deviceId}:`, bt: baseMs / 1_000, ...record } : record));
}

/** Readings without a clock: no time at all, so that whoever receives them takes their arrival. */
export function undatedPack(deviceId: string, values: readonly ProbeValue[]): SenmlRecord[] {
  return values.map(({ channel, value }, index) => {
    const { name, unit } = probeChannels[channel];
    return index === 0 ? { bn: `${deviceId}:`, n: name, u: unit, v: value } : { n: name, u: unit, v: value };
  });
}
