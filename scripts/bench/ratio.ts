/** What one benchmark found: how many times as much, the middle of its rounds and how far they lay apart. */
export interface Ratio {
  name: string;
  /** What is compared with what, as a sentence to read the number with. */
  means: string;
  median: number;
  lowest: number;
  highest: number;
  rounds: number;
}

/** The middle value; of an even number the lower of the two, so that it is one that was seen. */
export function medianOf(values: readonly number[]): number {
  const median = values.toSorted((a, b) => a - b)[Math.floor((values.length - 1) / 2)];
  if (median === undefined) throw new RangeError('There is no median of nothing');
  return median;
}

export function ratioOf(name: string, means: string, rounds: readonly number[]): Ratio {
  return { name, means, median: medianOf(rounds), lowest: Math.min(...rounds), highest: Math.max(...rounds), rounds: rounds.length };
}
