import { noFaults, type Faults } from './device/faults.ts';

export const scenarioHelp = `scenarios:
  steady              nothing is wrong
  relay-stuck-on      head 1 runs on past its volume from its next run on, reporting it, until a stop order
  offline-for SECONDS loses the network for so long, right after the first connection
  silent              hears orders and neither obeys nor answers them
  unset-clock         does not know the time of day`;

export interface Scenario {
  faults: Faults;
  offlineForMs: number | null;
}

/** @returns null for a name that is none. */
export function readScenario(name: string, argument: string | undefined): Scenario | null {
  switch (name) {
    case 'steady':
      return { faults: noFaults(), offlineForMs: null };
    case 'relay-stuck-on':
      return { faults: { ...noFaults(), stuckHeads: [1] }, offlineForMs: null };
    case 'offline-for': {
      const seconds = Number(argument);
      return seconds > 0 ? { faults: noFaults(), offlineForMs: seconds * 1_000 } : null;
    }
    case 'silent':
      return { faults: { ...noFaults(), isSilent: true }, offlineForMs: null };
    case 'unset-clock':
      return { faults: { ...noFaults(), isClockUnset: true }, offlineForMs: null };
    default:
      return null;
  }
}
