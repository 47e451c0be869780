import type { WaterReading } from '../water/water.ts';

/** One channel of a probe set: what it sees, how it sees it, and how it is sent. */
export interface ProbeChannel {
  name: string;
  /** SenML unit (RFC 8428, section 12.1). */
  unit: string;
  /** From what the probe measures to what is sent in `unit`. */
  perUnit: number;
  /** Decimals that are sent, in `unit`. */
  decimals: number;
  /** Standard deviation of the noise, in the probe's own measure. */
  noise: number;
  /** Standard deviation of the drift that a week adds, in the probe's own measure. */
  driftPerWeek: number;
  /** First-order time constant, s. */
  timeConstantS: number;
  read(water: WaterReading): number;
}

/** What a probe set can carry, by channel. Noise, drift and time constants are usual for hobby probes (practice, no source). */
export const probeChannels = {
  temperature: {
    name: 'temperature',
    unit: 'Cel',
    perUnit: 1,
    decimals: 3,
    noise: 0.02,
    driftPerWeek: 0.005,
    timeConstantS: 30,
    read: (water) => water.temperatureC,
  },
  ph: { name: 'ph', unit: 'pH', perUnit: 1, decimals: 3, noise: 0.007, driftPerWeek: 0.012, timeConstantS: 20, read: (water) => water.ph },
  // Millivolts are no SenML unit: ORP goes out in volts.
  orp: {
    name: 'orp',
    unit: 'V',
    perUnit: 1e-3,
    decimals: 5,
    noise: 1.5,
    driftPerWeek: 4,
    timeConstantS: 120,
    read: (water) => water.orpMv,
  },
  conductivity: {
    name: 'conductivity',
    unit: 'S/m',
    perUnit: 0.1,
    decimals: 4,
    noise: 0.06,
    driftPerWeek: 0.1,
    timeConstantS: 30,
    read: (water) => water.conductivityMsPerCm,
  },
  oxygen: {
    name: 'oxygen',
    unit: 'kg/m3',
    perUnit: 1e-3,
    decimals: 6,
    noise: 0.03,
    driftPerWeek: 0.01,
    timeConstantS: 60,
    read: (water) => water.oxygenMgPerL,
  },
  level: {
    name: 'level:bottle',
    unit: 'l',
    perUnit: 1e-3,
    decimals: 4,
    noise: 1,
    driftPerWeek: 0.5,
    timeConstantS: 20,
    read: (water) => water.bottleMl,
  },
  power: {
    name: 'power:skimmer',
    unit: 'W',
    perUnit: 1,
    decimals: 1,
    noise: 0.3,
    driftPerWeek: 0,
    timeConstantS: 2,
    read: (water) => water.skimmerW,
  },
} as const satisfies Record<string, ProbeChannel>;

export type ProbeChannelName = keyof typeof probeChannels;
