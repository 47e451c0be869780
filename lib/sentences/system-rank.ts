import type { SystemStatus } from '#shared/contract/systems.ts';

/** How a system stands in rounds, from the worst. */
export const ranks = ['urgent', 'alarm', 'unheard', 'due', 'quiet'] as const;
export type Rank = (typeof ranks)[number];

const weekMs = 7 * 86_400_000;

/** `urgent`: an urgent alarm or a latch. `due`: dosing without a test of both nutrients in the last week, or stopped heads. */
export function rankOf(status: SystemStatus, nowMs: number): Rank {
  if (status.worstPriority === 'urgent' || status.latched) return 'urgent';
  if (status.openAlarms > 0 && status.worstPriority === 'high') return 'alarm';
  if (status.offlineDevices > 0) return 'unheard';
  if (status.openAlarms > 0) return 'alarm';
  const testIsDue = [status.nitrate, status.phosphate].some((test) => test === null || nowMs - Date.parse(test.at) > weekMs);
  return testIsDue || status.stoppedHeads > 0 ? 'due' : 'quiet';
}

const rankWords: Record<Rank, [one: string, many: string]> = {
  urgent: ['urgent', 'urgent'],
  alarm: ['with an alarm', 'with alarms'],
  unheard: ['unheard', 'unheard'],
  due: ['due', 'due'],
  quiet: ['quiet', 'quiet'],
};

/** `25 systems: 1 urgent, 2 unheard, 6 due, 16 quiet` */
export function countSentence(all: readonly Rank[]): string {
  const counts = ranks
    .map((rank) => ({ rank, count: all.filter((other) => other === rank).length }))
    .filter(({ count }) => count > 0)
    .map(({ rank, count }) => `${count} ${rankWords[rank][count === 1 ? 0 : 1]}`);
  const total = `${all.length} ${all.length === 1 ? 'system' : 'systems'}`;
  return counts.length === 0 ? total : `${total}: ${counts.join(', ')}`;
}
