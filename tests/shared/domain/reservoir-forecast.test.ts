import { describe, expect, it } from 'vitest';
import { emptyAtMs } from '#shared/domain/reservoir-forecast.ts';

const nowMs = Date.parse('2026-03-01T12:00:00Z');

describe('a reservoir', () => {
  it('lasts as many days as its dose goes into it', () => {
    expect(emptyAtMs({ remainingMl: 84, mlPerDay: 8.4, nowMs })).toBe(Date.parse('2026-03-11T12:00:00Z'));
  });

  it('is empty now when nothing, or less than nothing by the books, is left', () => {
    expect(emptyAtMs({ remainingMl: 0, mlPerDay: 8.4, nowMs })).toBe(nowMs);
    expect(emptyAtMs({ remainingMl: -3, mlPerDay: 8.4, nowMs })).toBe(nowMs);
  });

  it('has no end without a dose, or one beyond ten years', () => {
    expect(emptyAtMs({ remainingMl: 84, mlPerDay: 0, nowMs })).toBeNull();
    expect(emptyAtMs({ remainingMl: 3650, mlPerDay: 1, nowMs })).not.toBeNull();
    expect(emptyAtMs({ remainingMl: 3651, mlPerDay: 1, nowMs })).toBeNull();
  });
});
