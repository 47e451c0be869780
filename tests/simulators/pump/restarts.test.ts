import { describe, expect, it } from 'vitest';
import { newPump } from '../../../simulators/pump/pump-state.ts';
import { stepPump } from '../../../simulators/pump/step-pump.ts';
import { noonMs, plan, pumpBench } from './pump-bench.ts';

function dosing() {
  const bench = pumpBench();
  bench.put({ kind: 'schedule', payload: plan() });
  bench.put({ kind: 'button', head: 1, ml: 4 });
  bench.pass(2_500);
  bench.take();
  return bench;
}

describe('a power cut during a run', () => {
  it('ends the run as interrupted, with the volume last known and the time of it', () => {
    const bench = dosing();
    bench.restart(30_000);
    expect(bench.takeRuns()).toEqual([
      expect.objectContaining({ phase: 'ended', interrupted: true, ml: 2.5, atMs: noonMs + 2_500, begunMs: noonMs }),
    ]);
    expect(bench.headState()).toBe('idle');
  });

  it('does not go on with the run', () => {
    const bench = dosing();
    bench.restart(1_000);
    bench.take();
    bench.pass(60_000);
    expect(bench.takeRuns()).toEqual([]);
  });

  it('counts all that the run was to give in the ceilings, since nobody saw how much more came', () => {
    const bench = dosing();
    bench.restart(1_000);
    bench.put({ kind: 'schedule', payload: plan({ maxMlPerHour: 5 }, 2) });
    expect(bench.put({ kind: 'button', head: 1, ml: 1.1 }).refused).toBe('ceiling');
    expect(bench.put({ kind: 'button', head: 1, ml: 1 }).refused).toBeNull();
  });
});

describe('the lifetime counter', () => {
  it('grows by all that the motor gives and goes on after a restart', () => {
    const bench = dosing();
    bench.restart(1_000);
    bench.put({ kind: 'calibrate', head: 1, seconds: 2 });
    bench.pass(5_000);
    expect(bench.takeRuns().at(-1)).toMatchObject({ odometerMl: 4.5, odometerEpoch: 7 });
    expect(bench.describe().heads?.[0]).toMatchObject({ odometerMl: 4.5, odometerEpoch: 7 });
  });
});

describe('run ids', () => {
  it('differ for every run, over restarts and lost memories', () => {
    const ids = new Set<string>();
    const spec = { heads: [1], defaultMlPerSecond: 1 };
    for (const origin of ['first', 'second']) {
      let state = newPump(spec, origin, 0);
      let upMs = 0;
      const put = (input: Parameters<typeof stepPump>[2]) => {
        const step = stepPump(spec, state, input, { time: { nowMs: noonMs + upMs, isSet: true, upMs } });
        state = step.state;
        for (const message of step.messages) if (message.word === 'run' && message.payload.phase === 'begun') ids.add(message.payload.run);
      };
      put({ kind: 'schedule', payload: plan() });
      for (let count = 0; count < 5; count += 1) {
        put({ kind: 'button', head: 1, ml: 0.1 });
        upMs += 1_000;
        put(count === 2 ? { kind: 'boot' } : { kind: 'tick' });
      }
    }
    expect(ids.size).toBe(10);
  });
});

describe('a step', () => {
  it('changes nothing that it is given', () => {
    const spec = { heads: [1], defaultMlPerSecond: 1 };
    const before = newPump(spec, 'p', 0);
    const copy = structuredClone(before);
    stepPump(spec, before, { kind: 'schedule', payload: plan() }, { time: { nowMs: noonMs, isSet: true, upMs: 0 } });
    expect(before).toEqual(copy);
  });

  it('tells times that are no date while the clock is unset', () => {
    const bench = pumpBench();
    bench.put({ kind: 'schedule', payload: plan() });
    bench.setClock(false);
    bench.pass(5_000);
    bench.put({ kind: 'button', head: 1, ml: 1 });
    expect(bench.takeRuns()).toEqual([expect.objectContaining({ phase: 'begun', atMs: 5_000 })]);
  });
});
