import type { AlarmCode } from './alarm-codes.ts';
import type { LimitKind } from './alarm-rules.ts';

/** One thing to do; the sentence is made where it is shown. */
export type Advice =
  | { code: 'dry-hands' }
  | { code: 'lift-delivery-line' }
  | { code: 'unplug-pump-at-dry-point' }
  | { code: 'add-air-now' }
  | { code: 'skimmer-with-air' }
  | { code: 'stop-in-app' }
  | { code: 'check-pump-stopped' }
  | { code: 'call-for-help' }
  | { code: 'measure-oxygen-ph-temperature' }
  | { code: 'look-at-animals' }
  | { code: 'change-water'; leastPercent: number; mostPercent: number; withinDegC: number; withinSalinity: number }
  | { code: 'no-feeding'; hours: number }
  | { code: 'no-more-ozone' }
  | { code: 'find-what-else-doses' }
  | { code: 'compare-with-bottle' }
  | { code: 'hold-next-dose' }
  | { code: 'watch-water'; hours: number }
  | { code: 'check-device-power' }
  | { code: 'check-network' }
  | { code: 'check-bottle-level' }
  | { code: 'pump-goes-on-alone' };

/** When more carbon than meant may be in the water or still running in: what helps the animals first, in this order. */
const overdose: readonly Advice[] = [
  { code: 'dry-hands' },
  { code: 'lift-delivery-line' },
  { code: 'unplug-pump-at-dry-point' },
  { code: 'add-air-now' },
  { code: 'skimmer-with-air' },
  { code: 'stop-in-app' },
  { code: 'call-for-help' },
  { code: 'measure-oxygen-ph-temperature' },
  { code: 'look-at-animals' },
  { code: 'change-water', leastPercent: 20, mostPercent: 30, withinDegC: 0.5, withinSalinity: 0.5 },
  { code: 'no-feeding', hours: 24 },
  { code: 'no-more-ozone' },
];

const aboveSoft: readonly Advice[] = [
  { code: 'check-bottle-level' },
  { code: 'look-at-animals' },
  { code: 'find-what-else-doses' },
  { code: 'compare-with-bottle' },
  { code: 'hold-next-dose' },
  { code: 'watch-water', hours: 24 },
];

const runTooLong: readonly Advice[] = [
  ...overdose.slice(0, 3),
  { code: 'check-pump-stopped' },
  { code: 'compare-with-bottle' },
  ...overdose.slice(3),
];

const offline: readonly Advice[] = [
  { code: 'check-device-power' },
  { code: 'check-bottle-level' },
  { code: 'check-network' },
  { code: 'pump-goes-on-alone' },
];

/** First advice for an alarm: ordered, physical before anything on a screen. */
export function firstAdvice(code: AlarmCode, limitKind: LimitKind): readonly Advice[] {
  switch (code) {
    case 'volume-hour':
    case 'volume-day':
    case 'volume-week':
      return limitKind === 'hard' ? overdose : aboveSoft;
    case 'run-too-long':
      return runTooLong;
    case 'device-offline':
      return offline;
  }
}
