const DAY_MS = 86_400_000;

/** While carbon is dosed both nutrients are tested weekly. */
const TEST_EVERY_DAYS = 7;

/** From the worst to the best: the order of the rounds. */
export const systemRanks = ['urgent', 'latched', 'high', 'unheard', 'alarm', 'due', 'quiet'] as const;
export type SystemRank = (typeof systemRanks)[number];

export interface RankedFacts {
  worstPriority: 'low' | 'medium' | 'high' | 'urgent' | null;
  latched: boolean;
  offlineDevices: number;
  /** Carbon heads, and those of them that are kept stopped. */
  carbonHeads: number;
  stoppedHeads: number;
  /** RFC 3339 times of the newest test of each nutrient. */
  nitrate: { at: string } | null;
  phosphate: { at: string } | null;
}

/**
 * How pressing a system is: an urgent alarm, a latched interlock, a high alarm, something offline, any other alarm, something
 * due (a stopped head, or a nutrient untested for a week while a head doses carbon), or nothing.
 */
export function systemRank(facts: RankedFacts, nowMs: number): SystemRank {
  if (facts.worstPriority === 'urgent') return 'urgent';
  if (facts.latched) return 'latched';
  if (facts.worstPriority === 'high') return 'high';
  if (facts.offlineDevices > 0) return 'unheard';
  if (facts.worstPriority !== null) return 'alarm';
  const isStale = (test: { at: string } | null) => test === null || nowMs - Date.parse(test.at) > TEST_EVERY_DAYS * DAY_MS;
  const testIsDue = facts.carbonHeads > 0 && (isStale(facts.nitrate) || isStale(facts.phosphate));
  return testIsDue || facts.stoppedHeads > 0 ? 'due' : 'quiet';
}
