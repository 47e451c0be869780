import type { System } from '#shared/contract/systems.ts';
import { type SystemRank, systemRank } from '#shared/domain/system-rank.ts';
import { systemSentence, type StaleSince } from '../../lib/sentences/system-sentence.ts';
import type { StateMark } from '../ui/state-word.tsx';

export interface Round {
  id: string;
  name: string;
  siteName: string;
  sentence: string;
  rank: SystemRank;
  mark: StateMark;
  word: string;
}

const marks: Record<SystemRank, { mark: StateMark; word: string }> = {
  urgent: { mark: 'urgent', word: 'urgent' },
  latched: { mark: 'due', word: 'to be reset' },
  high: { mark: 'due', word: 'alarm' },
  unheard: { mark: 'unknown', word: 'unheard' },
  alarm: { mark: 'due', word: 'alarm' },
  due: { mark: 'due', word: 'due' },
  quiet: { mark: 'fine', word: 'quiet' },
};

/** What the list says of a system. Nothing is quiet while we cannot tell. */
export function roundOf(system: System, nowMs: number, staleSinceMs: StaleSince): Round {
  const rank = systemRank(system.status, nowMs);
  // An urgent alarm and a latch do not go away by themselves.
  const shown = staleSinceMs !== null && rank !== 'urgent' && rank !== 'latched' ? marks.unheard : marks[rank];
  return {
    id: system.id,
    name: system.name,
    siteName: system.siteName,
    sentence: systemSentence(system, nowMs, staleSinceMs),
    rank,
    ...shown,
  };
}

/** The systems in the order that is shown, new ones at the end, and how many stand elsewhere than the server would put them. */
export function inShownOrder<Item extends { id: string }>(
  shownIds: readonly string[],
  items: readonly Item[],
): { shown: Item[]; moved: number } {
  const known = shownIds.map((id) => items.find((item) => item.id === id)).filter((item): item is Item => item !== undefined);
  const added = items.filter((item) => !shownIds.includes(item.id));
  const shown = [...known, ...added];
  const moved = shown.filter((item, index) => items[index]?.id !== item.id).length;
  return { shown, moved };
}
