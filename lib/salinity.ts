import type { Series } from '#shared/contract/telemetry.ts';
import { practicalSalinity } from '#shared/domain/practical-salinity.ts';

/** Readings of the same water lie no further apart than this: salinity and temperature move slowly, and probes report each few minutes. */
const sameWaterMs = 15 * 60_000;

interface Read {
  value: number;
  atMs: number;
}

/** The two series from which salinity is computed. */
export interface SalinityPair {
  conductivity: Series;
  temperature: Series;
}

/** Conductivity with a thermometer, of the same device where there is one: they sit in the same water. Null without both. */
export function salinityPair(all: readonly Series[]): SalinityPair | null {
  const temperatures = all.filter((one) => one.quantity === 'temperature');
  const pairs = all
    .filter((one) => one.quantity === 'conductivity')
    .flatMap((conductivity) => temperatures.map((temperature) => ({ conductivity, temperature })));
  return pairs.find((pair) => pair.conductivity.deviceId === pair.temperature.deviceId) ?? pairs[0] ?? null;
}

function readOf({ lastT, lastValue }: Series): Read | null {
  return lastT === null || lastValue === null ? null : { value: lastValue, atMs: lastT };
}

const areApart = (one: Read, other: Read) => Math.abs(one.atMs - other.atMs) > sameWaterMs;

/** Salinity now with the temperature that it was computed at. */
export interface LatestSalinity {
  /** Practical salinity, no unit. */
  salinity: number;
  temperatureC: number;
  /** The older of the two readings. */
  atMs: number;
}

/**
 * Practical salinity (PSS-78) from the newest readings; null without both, where they are over 15 minutes apart, and where the
 * scale is not defined, as for a probe in air.
 */
export function latestSalinity(all: readonly Series[]): LatestSalinity | null {
  const pair = salinityPair(all);
  const conductivity = pair === null ? null : readOf(pair.conductivity);
  const temperature = pair === null ? null : readOf(pair.temperature);
  if (conductivity === null || temperature === null || areApart(conductivity, temperature)) return null;
  const salinity = practicalSalinity(conductivity.value, temperature.value);
  return salinity === null ? null : { salinity, temperatureC: temperature.value, atMs: Math.min(conductivity.atMs, temperature.atMs) };
}

/** Whether a reading tells of the same water as the salinity. */
export function isSameWater(reading: Series, salinity: LatestSalinity): boolean {
  const read = readOf(reading);
  return read !== null && Math.abs(read.atMs - salinity.atMs) <= sameWaterMs;
}
