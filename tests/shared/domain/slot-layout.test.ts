import * as fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { divideOverTimes, layOutSlots, PortionTooSmallError } from '../../../shared/domain/slot-layout.ts';

const window = { startUtcMin: 600, lengthMin: 480 };

describe('slots laid out in a window', () => {
  it.each([
    [2.1, 0.175],
    [4.2, 0.35],
    [6.3, 0.525],
    [8.4, 0.7],
  ])('split %f mL a day into 12 portions of %f mL', (mlPerDay, slotMl) => {
    expect(layOutSlots(mlPerDay, 12, 0.1, window)).toEqual({
      slotMl,
      slotsUtcMin: [600, 640, 680, 720, 760, 800, 840, 880, 920, 960, 1000, 1040],
    });
  });

  it('are fewer when the portion would be under the smallest accurate one', () => {
    expect(layOutSlots(2.1, 12, 0.5, window)).toEqual({ slotMl: 0.525, slotsUtcMin: [600, 720, 840, 960] });
  });

  it('round the portion down, never the day up', () => {
    expect(layOutSlots(2, 3, 0.1, window).slotMl).toBe(0.666);
  });

  it('wrap over midnight and stay ascending', () => {
    expect(layOutSlots(4, 4, 0.1, { startUtcMin: 1260, lengthMin: 480 }).slotsUtcMin).toEqual([60, 180, 1260, 1380]);
  });

  it('are refused with the dilution that would do when one portion is too small', () => {
    expect(() => layOutSlots(0.35, 12, 0.5, window)).toThrow(PortionTooSmallError);
    expect(() => layOutSlots(0.35, 12, 0.5, window)).toThrow(/at least 2 times/);
  });

  it('never pass the dose of the day, never go under the smallest portion, and are unique minutes', () => {
    const doses = fc.double({ min: 0.01, max: 500, noNaN: true });
    const smallest = fc.integer({ min: 1, max: 2000 }).map((thousandths) => thousandths / 1000);
    const windows = fc.record({ startUtcMin: fc.integer({ min: 0, max: 1439 }), lengthMin: fc.integer({ min: 96, max: 1440 }) });
    fc.assert(
      fc.property(doses, fc.integer({ min: 1, max: 96 }), smallest, windows, (mlPerDay, slots, smallestMl, anyWindow) => {
        fc.pre(mlPerDay >= smallestMl);
        const layout = layOutSlots(mlPerDay, slots, smallestMl, anyWindow);
        expect(layout.slotMl * layout.slotsUtcMin.length).toBeLessThanOrEqual(mlPerDay + 1e-5);
        expect(layout.slotMl).toBeGreaterThanOrEqual(smallestMl - 1e-9);
        expect(layout.slotsUtcMin.length).toBeLessThanOrEqual(slots);
        expect(new Set(layout.slotsUtcMin).size).toBe(layout.slotsUtcMin.length);
        expect([...layout.slotsUtcMin].sort((one, other) => one - other)).toEqual(layout.slotsUtcMin);
        expect(layout.slotsUtcMin.every((minute) => Number.isInteger(minute) && minute >= 0 && minute < 1440)).toBe(true);
      }),
    );
  });
});

describe('a dose divided over given times', () => {
  it('keeps the times, ascending and once', () => {
    expect(divideOverTimes(1.5, [720, 480, 600, 480], 0.1)).toEqual({ slotMl: 0.5, slotsUtcMin: [480, 600, 720] });
  });

  it('is refused when the portions would be too small', () => {
    expect(divideOverTimes(1.5, [480, 600, 720], 0.6)).toBeNull();
  });
});
