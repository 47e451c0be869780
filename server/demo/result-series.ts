import { createHash } from 'node:crypto';
import type { ResultStory } from './scenario.ts';

export interface StoryResult {
  daysAgo: number;
  value: number;
}

/** A kit's reader is off by up to about a step either way. The same name always gives the same. */
function readingError(name: string): number {
  return createHash('sha256').update(name).digest().readUInt32BE(0) / 2 ** 31 - 1;
}

function between(points: StoryResult[], daysAgo: number): number {
  const later = points.find((point) => point.daysAgo <= daysAgo) ?? points.at(-1);
  const earlier = points.findLast((point) => point.daysAgo >= daysAgo) ?? points[0];
  if (later === undefined || earlier === undefined) throw new Error('A story of results needs a point');
  if (later === earlier) return later.value;
  const share = (earlier.daysAgo - daysAgo) / (earlier.daysAgo - later.daysAgo);
  return earlier.value + share * (later.value - earlier.value);
}

/** The results of a story, oldest first, each on its line but for what a kit's reader makes of it. */
export function resultSeries(name: string, story: ResultStory): StoryResult[] {
  const first = story.points[0]?.daysAgo ?? 0;
  const last = story.points.at(-1)?.daysAgo ?? 0;
  const results: StoryResult[] = [];
  for (let daysAgo = first; daysAgo >= last; daysAgo -= story.everyDays) {
    const steps = Math.round(between(story.points, daysAgo) / story.step + readingError(`${name} ${story.quantity} ${daysAgo}`));
    results.push({ daysAgo, value: Number((steps * story.step).toFixed(4)) });
  }
  return results;
}
