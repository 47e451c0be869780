import type { SystemStatus } from '#shared/contract/systems.ts';
import type { Advice } from '#shared/domain/first-advice.ts';

/** Whether every carbon head is stopped and its pump has said so: only then is asking for a stop no advice any more. */
export function isStopProved({ stoppedHeads, carbonHeads, unconfirmedStops }: SystemStatus): boolean {
  return stoppedHeads > 0 && stoppedHeads >= carbonHeads && unconfirmedStops === 0;
}

/** First advice as a sentence to follow. */
export function adviceSentence(advice: Advice): string {
  switch (advice.code) {
    case 'dry-hands':
      return 'Dry your hands before you touch anything electric.';
    case 'lift-delivery-line':
      return 'Pull the delivery line out of the water and lift it above the reservoir: a siphon goes on without a pump.';
    case 'unplug-pump-at-dry-point':
      return 'Unplug the dosing pump at a dry point.';
    case 'add-air-now':
      return 'In the same minute: air stones in, and pumps turned to the surface.';
    case 'skimmer-with-air':
      return 'Run the protein skimmer with air, and watch its cup: it may overflow.';
    case 'stop-in-app':
      return 'Stop dosing here too.';
    case 'check-pump-stopped':
      return 'Look whether the head still turns, and whether liquid still moves in the line.';
    case 'call-for-help':
      return 'Call somebody who can come.';
    case 'measure-oxygen-ph-temperature':
      return 'Measure oxygen, pH and temperature.';
    case 'look-at-animals':
      return 'Look at the animals: gasping at the surface, closed polyps, cloudy water.';
    case 'change-water':
      return `Change ${advice.leastPercent} to ${advice.mostPercent} % of the water, matched within ${advice.withinDegC} degC and ${advice.withinSalinity} in salinity.`;
    case 'no-feeding':
      return `Do not feed for ${advice.hours} h.`;
    case 'no-more-ozone':
      return 'Do not turn up ozone.';
    case 'find-what-else-doses':
      return 'Find out what else gives carbon to this system: another head, or somebody by hand.';
    case 'compare-with-bottle':
      return 'Compare with the bottle: how much is really gone from it?';
    case 'hold-next-dose':
      return 'Hold dosing until you know why.';
    case 'watch-water':
      return `Watch the water for ${advice.hours} h: clarity, oxygen, behaviour, most of all before dawn.`;
    case 'check-device-power':
      return 'Look whether the device has power.';
    case 'check-network':
      return 'Look whether its network works.';
    case 'check-bottle-level':
      return 'Look at the bottle: is its level where it should be?';
    case 'pump-goes-on-alone':
      return 'A pump that is not heard keeps its own schedule: it doses on, and cannot be stopped from here.';
  }
}
