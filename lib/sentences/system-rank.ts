import { type SystemRank, systemRanks } from '#shared/domain/system-rank.ts';

/** What a rank is called on a screen: of one system, and of many. */
export const rankWords: Record<SystemRank, readonly [one: string, many: string]> = {
  urgent: ['urgent', 'urgent'],
  latched: ['to be reset', 'to be reset'],
  high: ['with an alarm', 'with alarms'],
  unheard: ['unheard', 'unheard'],
  alarm: ['with an alarm', 'with alarms'],
  due: ['due', 'due'],
  quiet: ['quiet', 'quiet'],
};

/** `25 systems: 1 urgent, 2 unheard, 6 due, 16 quiet`; ranks of the same name are counted together. */
export function countSentence(all: readonly SystemRank[]): string {
  const names = [...new Set(systemRanks.map((rank) => rankWords[rank][1]))];
  const counts = names
    .map((many) => ({ many, ranks: all.filter((rank) => rankWords[rank][1] === many) }))
    .flatMap(({ many, ranks: [first, ...others] }) =>
      first === undefined ? [] : [`${others.length + 1} ${others.length === 0 ? rankWords[first][0] : many}`],
    );
  const total = `${all.length} ${all.length === 1 ? 'system' : 'systems'}`;
  return counts.length === 0 ? total : `${total}: ${counts.join(', ')}`;
}
