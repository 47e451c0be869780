/** Before this no device of today was switched on: the clock is wrong. */
export const EARLIEST_MS = Date.UTC(2020, 0, 1);
/** A clock may run this much ahead of ours before its times are not believed. */
export const FARTHEST_AHEAD_MS = 10 * 60_000;
/** The last moment that a date can name: a number beyond it is no time at all. */
export const LATEST_MS = 8.64e15;
