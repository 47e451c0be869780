import * as fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { type DelayPending, delayStep, isPast } from '../../../shared/domain/alarm-delay.ts';

const delays = { onDelayMs: 10_000, offDelayMs: 4_000 };

describe('the on-delay', () => {
  it('holds an alarm back until the condition has lasted', () => {
    const first = delayStep({ isActive: false, conditionHolds: true, pending: null, nowMs: 1_000 }, delays);
    expect(first).toEqual({ pending: { edge: 'on', sinceMs: 1_000 }, event: null });
    const early = delayStep({ isActive: false, conditionHolds: true, pending: first.pending, nowMs: 10_999 }, delays);
    expect(early).toEqual({ pending: { edge: 'on', sinceMs: 1_000 }, event: null });
    const due = delayStep({ isActive: false, conditionHolds: true, pending: early.pending, nowMs: 11_000 }, delays);
    expect(due).toEqual({ pending: null, event: 'occur' });
  });

  it('starts anew when the condition was gone in between', () => {
    const gone = delayStep({ isActive: false, conditionHolds: false, pending: { edge: 'on', sinceMs: 1_000 }, nowMs: 9_000 }, delays);
    expect(gone).toEqual({ pending: null, event: null });
  });

  it('of zero lets the alarm occur at once', () => {
    const step = delayStep({ isActive: false, conditionHolds: true, pending: null, nowMs: 5 }, { onDelayMs: 0, offDelayMs: 0 });
    expect(step).toEqual({ pending: null, event: 'occur' });
  });
});

describe('the off-delay', () => {
  it('holds the return back until the condition has been gone', () => {
    const first = delayStep({ isActive: true, conditionHolds: false, pending: null, nowMs: 1_000 }, delays);
    expect(first.pending).toEqual({ edge: 'off', sinceMs: 1_000 });
    expect(delayStep({ isActive: true, conditionHolds: false, pending: first.pending, nowMs: 5_000 }, delays)).toEqual({
      pending: null,
      event: 'return',
    });
  });

  it('is not shortened by a pending on-delay from before', () => {
    const stale: DelayPending = { edge: 'on', sinceMs: 0 };
    expect(delayStep({ isActive: true, conditionHolds: false, pending: stale, nowMs: 60_000 }, delays).event).toBeNull();
  });
});

it('a condition that agrees with the alarm leaves nothing pending', () => {
  fc.assert(
    fc.property(fc.boolean(), fc.nat(), (same, nowMs) => {
      const step = delayStep({ isActive: same, conditionHolds: same, pending: { edge: 'on', sinceMs: 0 }, nowMs }, delays);
      expect(step).toEqual({ pending: null, event: null });
    }),
  );
});

describe('the deadband', () => {
  it('does not delay the coming of an alarm', () => {
    expect(isPast(0.001, 5, false)).toBe(true);
    expect(isPast(0, 5, false)).toBe(false);
  });

  it('keeps an active alarm until the value fell back by it', () => {
    expect(isPast(-0.4, 0.5, true)).toBe(true);
    expect(isPast(-0.5, 0.5, true)).toBe(false);
    expect(isPast(0, 0, true)).toBe(false);
  });
});
