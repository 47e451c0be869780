import * as fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { pumpCeilings } from '../../../shared/domain/pump-ceilings.ts';

describe('pump ceilings', () => {
  it('are 1.2 slots a run, and one slot over the fullest hour and the day', () => {
    expect(pumpCeilings(0.5, [480, 600, 720])).toEqual({ maxMlPerRun: 0.6, maxMlPerHour: 1, maxMlPerDay: 2 });
  });

  it('find the fullest hour across midnight', () => {
    expect(pumpCeilings(0.175, [5, 30, 700, 1430])).toMatchObject({ maxMlPerHour: 0.7 });
  });

  it('count a slot one hour later into the next hour', () => {
    expect(pumpCeilings(1, [480, 540])).toMatchObject({ maxMlPerHour: 2 });
  });

  it('allow nothing to a head without slots beyond its one portion', () => {
    expect(pumpCeilings(0, [])).toEqual({ maxMlPerRun: 0, maxMlPerHour: 0, maxMlPerDay: 0 });
  });

  it('always leave room for the schedule itself', () => {
    const minutes = fc.uniqueArray(fc.integer({ min: 0, max: 1439 }), { minLength: 1, maxLength: 96 });
    fc.assert(
      fc.property(fc.double({ min: 0.001, max: 100, noNaN: true }), minutes, (slotMl, slotsUtcMin) => {
        const ceilings = pumpCeilings(slotMl, slotsUtcMin);
        expect(ceilings.maxMlPerRun).toBeGreaterThanOrEqual(slotMl);
        expect(ceilings.maxMlPerHour).toBeGreaterThanOrEqual(2 * slotMl - 1e-6);
        expect(ceilings.maxMlPerDay).toBeGreaterThanOrEqual(ceilings.maxMlPerHour);
      }),
    );
  });
});
