import * as fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { type RunProgress, runBounds, runExcess } from '../../../shared/domain/run-too-long.ts';

const slot = { setMl: 0.55, maxMlPerRun: 0.66, mlPerSecond: 1.1 };
const running: RunProgress = { begunArrivedMs: 100_000, pumpBackMs: 0, serverBackMs: 0, ended: false, ml: 0 };

describe('the bounds of a run', () => {
  it('are one and a half times what it was to give and take, and ten seconds', () => {
    const bounds = runBounds(slot);
    expect(bounds.expectedMs).toBeCloseTo(500, 9);
    expect(bounds.longestMs).toBeCloseTo(10_750, 9);
    expect(bounds.mostMl).toBeCloseTo(0.825, 9);
  });

  it("come from the pump's ceiling where no volume is set", () => {
    const bounds = runBounds({ ...slot, setMl: null });
    expect(bounds.longestMs).toBeCloseTo(1.5 * 600 + 10_000, 9);
    expect(bounds.mostMl).toBeCloseTo(0.99, 9);
  });

  it('are 60 s and no volume without a schedule', () => {
    expect(runBounds({ setMl: null, maxMlPerRun: null, mlPerSecond: 1.1 })).toEqual({
      expectedMs: 60_000,
      longestMs: 100_000,
      mostMl: null,
    });
  });

  it('keep the volume of an order where the rate is unknown', () => {
    expect(runBounds({ setMl: 2, maxMlPerRun: null, mlPerSecond: null })).toEqual({ expectedMs: 60_000, longestMs: 100_000, mostMl: 3 });
  });
});

describe('a run', () => {
  const bounds = runBounds({ setMl: 1, maxMlPerRun: 1.2, mlPerSecond: 0.1 });

  it('is within bounds until the last moment, and too long right after it', () => {
    expect(runExcess(running, bounds, 125_000)).toBeNull();
    expect(runExcess(running, bounds, 125_001)).toEqual({ by: 'time', value: 25.001, limit: 25, unit: 's' });
  });

  it('is timed from the return of the pump or the server, whichever is later', () => {
    expect(runExcess({ ...running, pumpBackMs: 110_000 }, bounds, 130_000)).toBeNull();
    expect(runExcess({ ...running, pumpBackMs: 110_000, serverBackMs: 120_000 }, bounds, 144_000)).toBeNull();
    expect(runExcess({ ...running, pumpBackMs: 110_000, serverBackMs: 120_000 }, bounds, 145_001)).not.toBeNull();
  });

  it('is not timed while its pump is away', () => {
    expect(runExcess({ ...running, pumpBackMs: null }, bounds, 900_000)).toBeNull();
  });

  it('is too long by volume at once, even with its pump away, and even when it has ended', () => {
    const over = { by: 'volume', value: 1.51, limit: 1.5, unit: 'mL' };
    expect(runExcess({ ...running, ml: 1.51, pumpBackMs: null }, bounds, 100_001)).toEqual(over);
    expect(runExcess({ ...running, ml: 1.51, ended: true }, bounds, 900_000)).toEqual(over);
  });

  it('takes the sum of its portions as exact as it was meant', () => {
    const tenth = runBounds({ setMl: 0.2, maxMlPerRun: null, mlPerSecond: 1 });
    expect(runExcess({ ...running, ended: true, ml: 0.1 + 0.2 }, tenth, 0)).toBeNull();
  });

  it('that has ended within its volume is never too long', () => {
    const within = fc.double({ min: 0, max: 1.5, noNaN: true });
    fc.assert(
      fc.property(within, fc.nat(), (ml, nowMs) => {
        expect(runExcess({ ...running, ended: true, ml }, bounds, nowMs)).toBeNull();
      }),
    );
  });
});
