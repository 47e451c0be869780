import * as fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { type PlannedWindow, volumeLimits, volumeWindows } from '../../../shared/domain/volume-limits.ts';

const fromPlan = { softMl: null, hardMl: null };
const ml = fc.double({ min: 0.001, max: 1000, noNaN: true });
const scheduled: fc.Arbitrary<PlannedWindow & { largestSlotMl: number }> = fc.record({
  plannedMl: fc.oneof(fc.constant(0), ml),
  largestSlotMl: ml,
  ceilingMlPerDay: fc.option(ml),
});

describe('the volume limits of a schedule', () => {
  it('allow one slot more for soft and two for hard, where a slot is more than a tenth of the plan', () => {
    const planned = { plannedMl: 0.7, largestSlotMl: 0.7, ceilingMlPerDay: 8.4 };
    expect(volumeLimits('hour', planned, fromPlan)).toEqual({ softMl: 0.7 + 0.7, hardMl: 0.7 + 2 * 0.7 });
  });

  it('allow a tenth more for soft and a quarter for hard, where slots are small', () => {
    const limits = volumeLimits('day', { plannedMl: 10, largestSlotMl: 0.2, ceilingMlPerDay: null }, fromPlan);
    expect(limits).toEqual({ softMl: 11, hardMl: 12.5 });
  });

  it('keep hard of day and week at 1.25 times the ceiling', () => {
    const day = { plannedMl: 2.1, largestSlotMl: 0.525, ceilingMlPerDay: 2.4 };
    expect(volumeLimits('day', day, fromPlan).hardMl).toBeCloseTo(3, 9);
    const week = { plannedMl: 20, largestSlotMl: 2.5, ceilingMlPerDay: 2.6 };
    expect(volumeLimits('week', week, fromPlan).hardMl).toBeCloseTo(1.25 * 2.6 * 7, 9);
  });

  it('keep hard a tenth of a slot over soft where the plan is above the ceiling', () => {
    const limits = volumeLimits('day', { plannedMl: 8.4, largestSlotMl: 0.7, ceilingMlPerDay: 4 }, fromPlan);
    expect(limits.softMl).toBeCloseTo(9.24, 9);
    expect(limits.hardMl).toBeCloseTo(9.24 + 0.07, 9);
  });

  it('know no ceiling for an hour', () => {
    const limits = volumeLimits('hour', { plannedMl: 0.7, largestSlotMl: 0.7, ceilingMlPerDay: 0.01 }, fromPlan);
    expect(limits.hardMl).toBeCloseTo(2.1, 9);
  });

  it('are open without a schedule in the window', () => {
    for (const window of volumeWindows) {
      expect(volumeLimits(window, { plannedMl: 0, largestSlotMl: null, ceilingMlPerDay: 8.4 }, fromPlan)).toEqual(fromPlan);
    }
  });

  it('have soft under hard also where a number is only a hair above the plan', () => {
    const planned = { plannedMl: 0.0010000000000000033, largestSlotMl: 0.001, ceilingMlPerDay: null };
    const { softMl, hardMl } = volumeLimits('hour', planned, { softMl: null, hardMl: 0.0010000000000000035 });
    expect(hardMl).toBeGreaterThan(softMl ?? Number.POSITIVE_INFINITY);
  });

  it('always have soft under hard, whatever the plan and the numbers', () => {
    const numbers = fc.record({ softMl: fc.option(ml), hardMl: fc.option(ml) });
    fc.assert(
      fc.property(fc.constantFrom(...volumeWindows), scheduled, numbers, (window, planned, given) => {
        const { softMl, hardMl } = volumeLimits(window, planned, given);
        expect(softMl).not.toBeNull();
        expect(softMl ?? 0).toBeGreaterThan(0);
        expect(hardMl ?? 0).toBeGreaterThan(softMl ?? Infinity);
      }),
    );
  });

  it('never let hard of day and week pass both the ceiling and soft plus a tenth of a slot', () => {
    fc.assert(
      fc.property(fc.constantFrom('day' as const, 'week' as const), scheduled, (window, planned) => {
        const { softMl, hardMl } = volumeLimits(window, planned, fromPlan);
        if (planned.ceilingMlPerDay === null) return;
        const cap = Math.max(1.25 * planned.ceilingMlPerDay * (window === 'day' ? 1 : 7), (softMl ?? 0) + planned.largestSlotMl / 10);
        expect(hardMl ?? Infinity).toBeLessThanOrEqual(cap);
      }),
    );
  });

  it('never go off for the plan itself', () => {
    fc.assert(
      fc.property(fc.constantFrom(...volumeWindows), scheduled, (window, planned) => {
        expect(volumeLimits(window, planned, fromPlan).softMl ?? 0).toBeGreaterThan(planned.plannedMl);
      }),
    );
  });
});

describe('the numbers of a keeper', () => {
  it('take the place of the formulas, one by one', () => {
    const planned = { plannedMl: 10, largestSlotMl: 0.2, ceilingMlPerDay: null };
    expect(volumeLimits('day', planned, { softMl: 3, hardMl: 5 })).toEqual({ softMl: 3, hardMl: 5 });
    expect(volumeLimits('day', planned, { softMl: null, hardMl: 20 })).toEqual({ softMl: 11, hardMl: 20 });
    expect(volumeLimits('day', planned, { softMl: 12, hardMl: null })).toEqual({ softMl: 12, hardMl: 12.5 });
  });

  it('hold without a schedule too', () => {
    const none = { plannedMl: 0, largestSlotMl: null, ceilingMlPerDay: null };
    expect(volumeLimits('day', none, { softMl: null, hardMl: 5 })).toEqual({ softMl: null, hardMl: 5 });
  });

  it('make soft give way, and never hard, when the schedule outgrows them', () => {
    const planned = { plannedMl: 10, largestSlotMl: 1, ceilingMlPerDay: null };
    expect(volumeLimits('day', planned, { softMl: null, hardMl: 10.5 })).toEqual({ softMl: 10.25, hardMl: 10.5 });
    expect(volumeLimits('day', planned, { softMl: null, hardMl: 4 })).toEqual({ softMl: 3.6, hardMl: 4 });
    expect(volumeLimits('day', planned, { softMl: 40, hardMl: null })).toEqual({ softMl: 11.25, hardMl: 12.5 });
  });
});
