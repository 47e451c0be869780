import * as fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import {
  countedAtMs,
  isWindowClosed,
  OPEN_WINDOW_MS,
  openWindowEndsMs,
  SLOT_GRACE_MS,
  volumeTimeline,
} from '../../../shared/domain/rolling-volume.ts';

const nowMs = Date.parse('2026-03-29T01:00:00Z');

describe('the sum of a window', () => {
  it('leaves out what lies on its beginning and takes what lies on its end', () => {
    const timeline = volumeTimeline([
      { atMs: 1000, ml: 1 },
      { atMs: 2000, ml: 2 },
      { atMs: 3000, ml: 4 },
    ]);
    expect(timeline.sumMl(1000, 3000)).toBe(6);
    expect(timeline.sumMl(999, 2999)).toBe(3);
    expect(timeline.sumMl(3000, 9000)).toBe(0);
  });

  it('equals the plain sum, in whatever order the entries come', () => {
    const entries = fc.array(fc.record({ atMs: fc.integer({ min: 0, max: 500 }), ml: fc.integer({ min: -3, max: 50 }) }), {
      maxLength: 60,
    });
    fc.assert(
      fc.property(entries, fc.integer({ min: -5, max: 500 }), fc.integer({ min: 0, max: 300 }), (list, fromMs, lengthMs) => {
        const toMs = fromMs + lengthMs;
        const plain = list.filter((entry) => entry.atMs > fromMs && entry.atMs <= toMs).reduce((sum, entry) => sum + entry.ml, 0);
        expect(volumeTimeline(list).sumMl(fromMs, toMs)).toBe(plain);
      }),
    );
  });
});

describe('the time at which a delivery counts', () => {
  it('is the due time of a scheduled portion', () => {
    expect(countedAtMs({ atMs: nowMs + 9000, begunMs: nowMs + 8000, dueMs: nowMs })).toBe(nowMs);
  });

  it('is its own for all else', () => {
    expect(countedAtMs({ atMs: nowMs, begunMs: nowMs, dueMs: null })).toBe(nowMs);
  });

  it('is its own for a run that did not begin when it claims to have been due', () => {
    const dueMs = nowMs - 3 * 86_400_000;
    expect(countedAtMs({ atMs: nowMs, begunMs: nowMs, dueMs })).toBe(nowMs);
    expect(countedAtMs({ atMs: nowMs, begunMs: nowMs, dueMs: nowMs - 2 * SLOT_GRACE_MS - 1 })).toBe(nowMs);
  });
});

it('what a run still gives long after its due time counts when it is given', () => {
  const atMs = nowMs + OPEN_WINDOW_MS + 1;
  expect(countedAtMs({ atMs, begunMs: nowMs, dueMs: nowMs })).toBe(atMs);
  expect(countedAtMs({ atMs: atMs - 1, begunMs: nowMs, dueMs: nowMs })).toBe(nowMs);
});

describe('the windows that still count', () => {
  it('end now and at each instant of the last ten minutes', () => {
    const openFromMs = nowMs - OPEN_WINDOW_MS;
    const instants = [openFromMs - 1, openFromMs, openFromMs + 1, nowMs - 5];
    expect(openWindowEndsMs(instants, openFromMs, nowMs)).toEqual([openFromMs + 1, nowMs - 5, nowMs]);
  });

  it('include the end of a delivery that a fast clock dates ahead', () => {
    expect(openWindowEndsMs([nowMs + 60_000], nowMs - OPEN_WINDOW_MS, nowMs)).toEqual([nowMs, nowMs + 60_000]);
  });

  it('hold every maximum: no other end in the open time has a larger sum', () => {
    const entries = fc.array(fc.record({ atMs: fc.integer({ min: 0, max: 200 }), ml: fc.integer({ min: 1, max: 9 }) }), { maxLength: 30 });
    fc.assert(
      fc.property(entries, fc.integer({ min: 1, max: 80 }), (list, windowMs) => {
        const timeline = volumeTimeline(list);
        const best = Math.max(...openWindowEndsMs(timeline.instantsMs, 100, 200).map((end) => timeline.sumMl(end - windowMs, end)));
        for (let end = 101 + windowMs; end <= 200; end += 1) expect(timeline.sumMl(end - windowMs, end)).toBeLessThanOrEqual(best);
      }),
    );
  });

  it('are closed ten minutes after their end', () => {
    expect(isWindowClosed(nowMs - OPEN_WINDOW_MS, nowMs)).toBe(true);
    expect(isWindowClosed(nowMs - OPEN_WINDOW_MS + 1, nowMs)).toBe(false);
  });
});
