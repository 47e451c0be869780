import { array, assert, boolean, constant, double, integer, oneof, property, record } from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { RunPayload } from '#shared/mqtt/payloads.ts';
import { plan, pumpBench } from './pump-bench.ts';

const tight = { slotMl: 1, maxMlPerRun: 2, maxMlPerHour: 3, maxMlPerDay: 4 };

function tightBench() {
  const bench = pumpBench();
  bench.put({ kind: 'schedule', payload: plan({ ...tight, slotsUtcMin: [] }) });
  return bench;
}

/** Presses the button for so much and waits for the end; why it was refused, or null. */
function press(bench: ReturnType<typeof pumpBench>, ml: number): string | null {
  const { refused } = bench.put({ kind: 'button', head: 1, ml });
  bench.pass(10_000);
  return refused;
}

describe('the ceilings of a pump', () => {
  it('hold for a run, an hour and 86,400 s', () => {
    const bench = tightBench();
    expect([press(bench, 2.1), press(bench, 2), press(bench, 1.1), press(bench, 1)]).toEqual(['ceiling', null, 'ceiling', null]);
    bench.pass(3_600_000);
    expect([press(bench, 1.5), press(bench, 1), press(bench, 0.1)]).toEqual(['ceiling', null, 'ceiling']);
    bench.pass(86_400_000 - 3_600_000);
    expect(press(bench, 2)).toBeNull();
  });

  it('count what was given before a restart', () => {
    const bench = tightBench();
    press(bench, 2);
    press(bench, 1);
    bench.restart(60_000);
    expect(press(bench, 0.5)).toBe('ceiling');
  });

  it('count all that was ever given while a pump does not know how long ago it was', () => {
    const bench = tightBench();
    press(bench, 2);
    press(bench, 1);
    bench.restart(7_200_000, false);
    expect(press(bench, 0.5)).toBe('ceiling');
    bench.setClock(true);
    expect(press(bench, 0.5)).toBeNull();
  });

  it('count from the setting of the clock what an earlier power-on gave without one', () => {
    const bench = tightBench();
    bench.setClock(false);
    press(bench, 2);
    bench.restart(1_000);
    bench.setClock(true);
    expect(press(bench, 1.5)).toBe('ceiling');
    bench.pass(3_600_000);
    expect(press(bench, 1.5)).toBeNull();
  });

  it('follow a clock that is moved', () => {
    const bench = tightBench();
    press(bench, 2);
    press(bench, 1);
    bench.moveClock(7 * 86_400_000);
    expect(press(bench, 0.5)).toBe('ceiling');
  });

  it('refuse a slot for good', () => {
    const bench = pumpBench();
    bench.put({ kind: 'schedule', payload: plan({ slotMl: 1, maxMlPerRun: 2, maxMlPerHour: 2, maxMlPerDay: 20 }) });
    bench.pass(9 * 60_000);
    press(bench, 1.5);
    bench.take();
    bench.pass(100 * 60_000);
    expect(bench.takeRuns()).toEqual([]);
    bench.pass(20 * 60_000);
    expect(bench.takeRuns().at(-1)).toMatchObject({ cause: 'schedule', ml: 1 });
  });

  it('end a run in progress when a new schedule lowers them', () => {
    const bench = tightBench();
    bench.put({ kind: 'button', head: 1, ml: 2 });
    bench.pass(1_000);
    bench.put({ kind: 'schedule', payload: plan({ ...tight, maxMlPerRun: 1.2, slotsUtcMin: [] }, 2) });
    bench.pass(5_000);
    expect(bench.takeRuns().at(-1)).toMatchObject({ phase: 'ended', ml: 1.2 });
  });

  it('let a calibration through and do not count it', () => {
    const bench = tightBench();
    bench.put({ kind: 'calibrate', head: 1, seconds: 30 });
    bench.pass(40_000);
    expect(bench.takeRuns().at(-1)).toMatchObject({ phase: 'ended', cause: 'calibration', ml: 30 });
    expect(press(bench, 2)).toBeNull();
  });

  it('are each head its own', () => {
    const bench = pumpBench();
    const [head] = plan({ ...tight, slotsUtcMin: [] }).heads;
    if (head === undefined) throw new Error('the plan has one head');
    bench.put({ kind: 'schedule', payload: { version: 1, heads: [head, { ...head, head: 2 }] } });
    press(bench, 2);
    expect(bench.put({ kind: 'button', head: 2, ml: 2 }).refused).toBeNull();
  });
});

const anything = oneof(
  record({ kind: constant('pass' as const), ms: integer({ min: 1, max: 1_200_000 }) }),
  record({ kind: constant('stall' as const), ms: integer({ min: 1, max: 5_400_000 }) }),
  record({ kind: constant('restart' as const), ms: integer({ min: 0, max: 120_000 }) }),
  record({ kind: constant('button' as const), ml: double({ min: 0.01, max: 3, noNaN: true }) }),
  record({ kind: constant('dose' as const), ml: double({ min: 0.01, max: 3, noNaN: true }) }),
  record({ kind: constant('prime' as const), seconds: integer({ min: 1, max: 3 }) }),
  record({ kind: constant('schedule' as const), slotMl: double({ min: 0, max: 2.5, noNaN: true }), enabled: boolean() }),
  record({ kind: constant('stop' as const) }),
  record({ kind: constant('resume' as const) }),
);

describe('whatever happens to a pump', () => {
  it('it never gives more than its ceilings in any window', () => {
    assert(
      property(array(anything, { maxLength: 60 }), (happenings) => {
        const bench = pumpBench();
        let version = 1;
        const slotsUtcMin = [0, 1, 2, 30, 300, 720, 721, 725, 730, 731, 800, 1000, 1439];
        bench.put({ kind: 'schedule', payload: plan({ ...tight, slotsUtcMin }) });
        for (const one of happenings) {
          if (one.kind === 'pass') bench.pass(one.ms);
          else if (one.kind === 'stall') bench.skip(one.ms);
          else if (one.kind === 'restart') bench.restart(one.ms);
          else if (one.kind === 'button') bench.put({ kind: 'button', head: 1, ml: one.ml });
          else if (one.kind === 'dose') bench.order({ do: 'dose', ml: one.ml });
          else if (one.kind === 'prime') bench.order({ do: 'prime', seconds: one.seconds });
          else if (one.kind === 'schedule')
            bench.put({ kind: 'schedule', payload: plan({ ...tight, slotsUtcMin, slotMl: one.slotMl, enabled: one.enabled }, ++version) });
          else bench.order({ do: one.kind, expiresAtMs: one.kind === 'stop' ? null : bench.nowMs + 1_000 });
        }
        bench.pass(10_000);
        expectWithinCeilings(bench.takeRuns());
      }),
      { numRuns: 200 },
    );
  });
});

/** Every window that ends with a run, over all runs in it. */
function expectWithinCeilings(messages: RunPayload[]): void {
  const runs = messages.filter((run) => run.phase === 'ended');
  const slack = 1e-6 + runs.length * 1e-4;
  for (const last of runs) {
    const within = (windowMs: number) =>
      runs.filter((run) => run.atMs <= last.atMs && run.atMs > last.atMs - windowMs).reduce((sum, run) => sum + run.ml, 0);
    expect(last.ml).toBeLessThanOrEqual(tight.maxMlPerRun + slack);
    expect(within(3_600_000)).toBeLessThanOrEqual(tight.maxMlPerHour + slack);
    expect(within(86_400_000)).toBeLessThanOrEqual(tight.maxMlPerDay + slack);
  }
}
