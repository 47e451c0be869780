/**
 * A small seeded generator (mulberry32 by Tommy Ettinger, public domain): 32 bits of state, passes gjrand, plenty for noise on
 * a probe and never for secrets. Its state is a plain number, so that a device can keep it through a restart.
 */
export interface Random {
  /** Uniform in [0, 1). */
  next(): number;
  /** Normal with mean 0 and standard deviation 1. */
  gauss(): number;
  /** What a later {@link randomFrom} goes on from. */
  readonly state: number;
}

export function randomFrom(seed: number): Random {
  let state = seed >>> 0;
  const next = () => {
    state = (state + 0x6d2b79f5) >>> 0;
    let mixed = state;
    mixed = Math.imul(mixed ^ (mixed >>> 15), mixed | 1);
    mixed ^= mixed + Math.imul(mixed ^ (mixed >>> 7), mixed | 61);
    return ((mixed ^ (mixed >>> 14)) >>> 0) / 4_294_967_296;
  };
  return {
    next,
    // Box-Muller; 1 - next() keeps the logarithm off zero.
    gauss: () => Math.sqrt(-2 * Math.log(1 - next())) * Math.cos(2 * Math.PI * next()),
    get state() {
      return state;
    },
  };
}

/** A seed of its own for each named part of a device, so that adding a part does not change the others (FNV-1a). */
export function seedFor(seed: number, part: string): number {
  let hash = (0x811c9dc5 ^ seed) >>> 0;
  for (const character of part) hash = Math.imul(hash ^ (character.codePointAt(0) ?? 0), 0x01000193) >>> 0;
  return hash;
}
