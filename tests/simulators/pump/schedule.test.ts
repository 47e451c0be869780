import { describe, expect, it } from 'vitest';
import { noonMs, plan, pumpBench } from './pump-bench.ts';

const minutes = (count: number) => count * 60_000;
const begun = (bench: ReturnType<typeof pumpBench>) => bench.takeRuns().filter((run) => run.phase === 'begun');

describe('a schedule', () => {
  it('starts a slot at its due time and gives its volume', () => {
    const bench = pumpBench();
    bench.put({ kind: 'schedule', payload: plan() });
    bench.pass(minutes(11));
    expect(bench.takeRuns()).toEqual([
      expect.objectContaining({
        phase: 'begun',
        ml: 0,
        cause: 'schedule',
        scheduleVersion: 1_767_225_600,
        dueMs: noonMs + minutes(10),
        atMs: noonMs + minutes(10),
      }),
      expect.objectContaining({ phase: 'ended', ml: 0.6, onMs: 600, atMs: noonMs + minutes(10) + 600, begunMs: noonMs + minutes(10) }),
    ]);
  });

  it('says `running` about each second, and `begun` and `ended` once', () => {
    const bench = pumpBench();
    bench.put({ kind: 'schedule', payload: plan({ slotMl: 3.5 }) });
    bench.pass(minutes(11));
    const runs = bench.takeRuns();
    expect(runs.map((run) => [run.phase, run.ml])).toEqual([
      ['begun', 0],
      ['running', 1],
      ['running', 2],
      ['running', 3],
      ['ended', 3.5],
    ]);
    expect(new Set(runs.map((run) => run.run)).size).toBe(1);
  });

  it('runs a slot every day', () => {
    const bench = pumpBench();
    bench.put({ kind: 'schedule', payload: plan() });
    bench.pass(minutes(3 * 1440));
    expect(begun(bench).map((run) => ((run.dueMs ?? 0) - noonMs) / minutes(1))).toEqual([10, 120, 1450, 1560, 2890, 3000]);
  });

  it('starts a slot up to 60 s late', () => {
    const bench = pumpBench();
    bench.put({ kind: 'schedule', payload: plan() });
    bench.skip(minutes(11));
    expect(begun(bench)).toEqual([expect.objectContaining({ dueMs: noonMs + minutes(10), atMs: noonMs + minutes(11) })]);
  });

  it('skips a slot for good when it is more than 60 s late', () => {
    const bench = pumpBench();
    bench.put({ kind: 'schedule', payload: plan() });
    bench.skip(minutes(11) + 1);
    bench.pass(minutes(60));
    expect(bench.takeRuns()).toEqual([]);
  });

  it('runs only slots due later than the arrival of the schedule', () => {
    const bench = pumpBench(noonMs + minutes(10));
    bench.put({ kind: 'schedule', payload: plan() });
    bench.pass(minutes(30));
    expect(bench.takeRuns()).toEqual([]);
  });

  it('obeys the retained message whatever its number', () => {
    const bench = pumpBench();
    bench.put({ kind: 'schedule', payload: plan({}, 500) });
    bench.put({ kind: 'schedule', payload: plan({ slotsUtcMin: [725] }, 3) });
    expect(bench.describe().scheduleVersion).toBe(3);
    bench.pass(minutes(10));
    expect(begun(bench)).toEqual([expect.objectContaining({ scheduleVersion: 3, dueMs: noonMs + minutes(5) })]);
  });

  it('does not take the same message again, as at every connection, for a new schedule', () => {
    const bench = pumpBench();
    bench.put({ kind: 'schedule', payload: plan() });
    bench.pass(minutes(9));
    bench.put({ kind: 'button', head: 1, ml: 4.9 });
    bench.pass(1_000);
    // Due at 12:10, with the head busy until then, and the retained message comes again after it fell due.
    bench.skip(minutes(1) + 2_000);
    expect(begun(bench)).toHaveLength(2);
    const arrivedMs = bench.state.scheduleArrivedMs;
    bench.put({ kind: 'schedule', payload: plan() });
    expect(bench.state.scheduleArrivedMs).toBe(arrivedMs);
  });

  it('keeps the schedule through a restart and proves it', () => {
    const bench = pumpBench();
    bench.put({ kind: 'schedule', payload: plan() });
    bench.restart(minutes(5));
    expect(bench.describe().scheduleVersion).toBe(1_767_225_600);
    bench.pass(minutes(6));
    expect(begun(bench)).toHaveLength(1);
  });

  it('starts after a restart within 60 s of the due time, and does not repeat the slot at the next', () => {
    const bench = pumpBench();
    bench.put({ kind: 'schedule', payload: plan() });
    bench.pass(minutes(9));
    bench.restart(minutes(1) + 30_000);
    bench.pass(5_000);
    bench.restart(5_000);
    bench.pass(minutes(5));
    expect(begun(bench)).toHaveLength(1);
  });

  it('gives nothing from a head that is not listed or not enabled', () => {
    const bench = pumpBench();
    bench.put({ kind: 'schedule', payload: plan({ enabled: false }) });
    bench.pass(minutes(30));
    expect(bench.put({ kind: 'button', head: 1, ml: 0.1 }).refused).toBe('disabled');
    expect(bench.put({ kind: 'button', head: 2, ml: 0.1 }).refused).toBe('disabled');
    expect(bench.takeRuns()).toEqual([]);
  });

  it('gives nothing before its first schedule and after the retained message was emptied', () => {
    const bench = pumpBench();
    expect(bench.put({ kind: 'button', head: 1, ml: 0.1 }).refused).toBe('disabled');
    bench.put({ kind: 'schedule', payload: plan() });
    bench.put({ kind: 'schedule', payload: null });
    expect(bench.describe().scheduleVersion).toBeNull();
    bench.pass(minutes(30));
    expect(bench.takeRuns()).toEqual([]);
  });

  it('ends the run in progress when a new schedule disables the head', () => {
    const bench = pumpBench();
    bench.put({ kind: 'schedule', payload: plan() });
    bench.put({ kind: 'button', head: 1, ml: 4 });
    bench.pass(1_500);
    bench.put({ kind: 'schedule', payload: plan({ enabled: false }, 2) });
    expect(bench.takeRuns().at(-1)).toMatchObject({ phase: 'ended', ml: 1.5 });
    expect(bench.headState()).toBe('idle');
  });

  it('waits up to 60 s for a busy head, then skips the slot', () => {
    const bench = pumpBench();
    const roomy = { maxMlPerRun: 500, maxMlPerHour: 500, maxMlPerDay: 500 };
    bench.put({ kind: 'schedule', payload: plan(roomy) });
    bench.pass(minutes(9));
    bench.put({ kind: 'button', head: 1, ml: 90 });
    bench.pass(minutes(5));
    expect(begun(bench).map((run) => [run.cause, run.atMs - noonMs])).toEqual([
      ['button', minutes(9)],
      ['schedule', minutes(10) + 30_000],
    ]);
    bench.pass(minutes(104));
    bench.put({ kind: 'button', head: 1, ml: 200 });
    bench.pass(minutes(30));
    expect(begun(bench).map((run) => run.cause)).toEqual(['button']);
  });

  it('runs nothing while the clock is not set, and after that only what falls due later', () => {
    const bench = pumpBench();
    bench.setClock(false);
    bench.put({ kind: 'schedule', payload: plan() });
    bench.pass(minutes(10) + 20_000);
    bench.setClock(true);
    bench.pass(minutes(120));
    expect(begun(bench).map((run) => run.dueMs)).toEqual([noonMs + minutes(120)]);
  });

  it('never runs a slot twice, whatever is done to its clock', () => {
    const bench = pumpBench();
    bench.put({ kind: 'schedule', payload: plan() });
    bench.pass(minutes(15));
    bench.moveClock(-minutes(10));
    bench.pass(minutes(20));
    expect(begun(bench)).toHaveLength(1);
  });

  it('is not held back by a schedule that came while its clock ran ahead', () => {
    const bench = pumpBench();
    bench.moveClock(minutes(1440 * 365));
    bench.put({ kind: 'schedule', payload: plan() });
    bench.moveClock(-minutes(1440 * 365));
    bench.pass(minutes(11));
    expect(begun(bench)).toHaveLength(1);
  });
});
