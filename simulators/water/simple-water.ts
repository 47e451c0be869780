import { z } from 'zod';
import { randomFrom, seedFor } from '../random.ts';
import type { Water, WaterEvent, WaterReading } from './water.ts';

/** One system, as this model sees it. */
export interface SimpleWaterSpec {
  seed: number;
  netLitres: number;
  /** Hours of the UTC day at which the lights go on and off. */
  lightsOnUtcH: number;
  lightsOffUtcH: number;
  /** Carbon in a mL of what is dosed, mg. */
  carbonMgPerMl: number;
  bottleMl: number;
  temperatureC: number;
  nitrateMgPerL: number;
  phosphateMgPerL: number;
}

const stateSchema = z.object({
  atMs: z.number(),
  randomState: z.number(),
  wander: z.number(),
  carbonMgPerL: z.number(),
  habitMgPerLPerDay: z.number(),
  fedMgPerL: z.number(),
  orpMv: z.number(),
  nitrateMgPerL: z.number(),
  phosphateMgPerL: z.number(),
  bottleMl: z.number(),
});
type SimpleWaterState = z.infer<typeof stateSchema>;

const DAY_S = 86_400;
const HOUR_S = 3_600;
/** Dissolved oxygen at 25 degC and a salinity of 35 (Garcia & Gordon 1992), mg/L. */
const OXYGEN_SATURATION_MG_PER_L = 6.771;
/** Conductivity at a salinity of 35 (PSS-78), near 25 degC, mS/cm, and how it follows temperature. */
const conductivityAt = (temperatureC: number) => 53.07 * (1 + 0.0197 * (temperatureC - 25));

const decay = (sinceS: number, timeConstantS: number) => Math.exp(-sinceS / timeConstantS);

/**
 * A plain stand-in for water: every figure follows its cause with a time constant, and no mass is balanced.
 *
 * - Light lifts temperature, pH and oxygen by day (swings 0.5 degC, 0.25, 0.9 mg/L: practice) with a lag of some hours.
 * - Labile carbon is eaten within hours; while it lasts it takes oxygen and ORP down.
 * - The bacteria's habit of carbon follows what they eat over ten days; nutrients fall with it and rise with food, over weeks.
 * - ORP (invented): 350 + 60 log10(O2/saturation) - 40 log10(1 + C/0.5) - 40 (pH - 8.1), mV, with a time constant of 1 h.
 *
 * Each part is advanced by its exact solution over the step, so that five-minute and ten-second steps agree.
 */
export function createSimpleWater(spec: SimpleWaterSpec, startMs: number, saved?: unknown): Water {
  const state: SimpleWaterState =
    saved === undefined
      ? {
          atMs: startMs,
          randomState: seedFor(spec.seed, 'water'),
          wander: 0,
          carbonMgPerL: 0,
          habitMgPerLPerDay: 0,
          fedMgPerL: 0,
          orpMv: 350,
          nitrateMgPerL: spec.nitrateMgPerL,
          phosphateMgPerL: spec.phosphateMgPerL,
          bottleMl: spec.bottleMl,
        }
      : stateSchema.parse(saved);

  /** -1 in the depth of the night to 1 in the afternoon, lagging the lights by three hours. */
  function light(): number {
    const hour = (state.atMs / 1_000 / HOUR_S) % 24;
    const middle = (spec.lightsOnUtcH + spec.lightsOffUtcH) / 2 + 3;
    return Math.cos(((hour - middle) / 24) * 2 * Math.PI);
  }

  const temperatureC = () => spec.temperatureC + 0.25 * light() + 0.15 * state.wander;
  const ph = () => 8.12 + 0.125 * light() + 0.02 * state.wander - 0.03 * Math.min(1, state.carbonMgPerL) - 0.01 * state.fedMgPerL;
  const oxygenMgPerL = () =>
    Math.max(0.5, OXYGEN_SATURATION_MG_PER_L - 0.1 + 0.45 * light() - 0.35 * Math.min(4, state.carbonMgPerL) - 0.05 * state.fedMgPerL);

  function settledOrpMv(): number {
    return (
      350 +
      60 * Math.log10(oxygenMgPerL() / OXYGEN_SATURATION_MG_PER_L) -
      40 * Math.log10(1 + state.carbonMgPerL / 0.5) -
      40 * (ph() - 8.1) -
      4 * state.fedMgPerL
    );
  }

  return {
    advanceTo(nowMs) {
      const sinceS = (nowMs - state.atMs) / 1_000;
      if (sinceS <= 0) return;
      const random = randomFrom(state.randomState);
      const stays = decay(sinceS, 2 * DAY_S);
      state.wander = state.wander * stays + Math.sqrt(1 - stays * stays) * random.gauss();
      state.randomState = random.state;
      const left = decay(sinceS, 0.25 * DAY_S);
      const eatenPerDay = (state.carbonMgPerL * (1 - left)) / (sinceS / DAY_S);
      state.carbonMgPerL *= left;
      state.habitMgPerLPerDay = eatenPerDay + (state.habitMgPerLPerDay - eatenPerDay) * decay(sinceS, 10 * DAY_S);
      state.fedMgPerL *= decay(sinceS, 2 * HOUR_S);
      const days = sinceS / DAY_S;
      // 1 mg of carbon per litre and day, day after day, is taken as half of all that the bacteria can do.
      const activity = state.habitMgPerLPerDay / (1 + state.habitMgPerLPerDay);
      state.nitrateMgPerL = Math.max(0.2, state.nitrateMgPerL + days * (0.08 - 0.035 * activity * state.nitrateMgPerL));
      state.phosphateMgPerL = Math.max(0.005, state.phosphateMgPerL + days * (0.002 - 0.04 * activity * state.phosphateMgPerL));
      state.atMs = nowMs;
      const settled = settledOrpMv();
      state.orpMv = settled + (state.orpMv - settled) * decay(sinceS, HOUR_S);
    },
    happen(event: WaterEvent) {
      switch (event.kind) {
        case 'carbon':
          state.carbonMgPerL += (event.ml * spec.carbonMgPerMl) / spec.netLitres;
          state.bottleMl = Math.max(0, state.bottleMl - event.ml);
          break;
        case 'feeding':
          state.fedMgPerL += 3;
          state.nitrateMgPerL += 0.05;
          break;
        case 'water-change':
          state.nitrateMgPerL *= 1 - event.share;
          state.phosphateMgPerL *= 1 - event.share;
          state.carbonMgPerL *= 1 - event.share;
          break;
        case 'refill':
          state.bottleMl = event.ml;
          break;
      }
    },
    read(): WaterReading {
      return {
        temperatureC: temperatureC(),
        ph: ph(),
        orpMv: state.orpMv,
        conductivityMsPerCm: conductivityAt(temperatureC()),
        oxygenMgPerL: oxygenMgPerL(),
        nitrateMgPerL: state.nitrateMgPerL,
        phosphateMgPerL: state.phosphateMgPerL,
        bottleMl: state.bottleMl,
        skimmerW: 24 + 0.4 * state.wander,
      };
    },
    save: () => ({ ...state }),
  };
}
