import { describe, expect, it } from 'vitest';
import { noonMs, plan, pumpBench } from './pump-bench.ts';

function scheduled() {
  const bench = pumpBench();
  bench.put({ kind: 'schedule', payload: plan() });
  return bench;
}

describe('a stop order', () => {
  it('ends the run at once, says what was given, and leaves the head stopped', () => {
    const bench = scheduled();
    bench.order({ do: 'dose', ml: 4 });
    bench.pass(2_500);
    bench.take();
    const id = bench.order({ do: 'stop', expiresAtMs: null });
    expect(bench.take()).toEqual([
      { word: 'run', payload: expect.objectContaining({ phase: 'ended', ml: 2.5 }) },
      { word: 'receipt', payload: { order: id, atMs: bench.nowMs, outcome: 'done', why: undefined } },
    ]);
    expect(bench.headState()).toBe('stopped');
  });

  it('is obeyed with an unset clock and years after it was given', () => {
    const bench = scheduled();
    bench.setClock(false);
    bench.order({ do: 'stop', expiresAtMs: null });
    expect(bench.takeReceipts()).toEqual([expect.objectContaining({ outcome: 'done' })]);
    expect(bench.headState()).toBe('stopped');
  });

  it('stops the head that it names and no other', () => {
    const bench = scheduled();
    bench.order({ do: 'stop', head: 2, expiresAtMs: null });
    expect([bench.headState(1), bench.headState(2)]).toEqual(['idle', 'stopped']);
  });

  it('stays through restarts and new schedules, and ends only by resume', () => {
    const bench = scheduled();
    bench.order({ do: 'stop', expiresAtMs: null });
    bench.restart(1_000);
    bench.put({ kind: 'schedule', payload: plan({}, 2) });
    bench.pass(20 * 60_000);
    expect(bench.headState()).toBe('stopped');
    bench.take();
    bench.order({ do: 'resume' });
    expect(bench.takeReceipts()).toEqual([expect.objectContaining({ outcome: 'done' })]);
    expect(bench.headState()).toBe('idle');
  });

  it('refuses slots, dose and prime; a refused slot does not run after the resume', () => {
    const bench = scheduled();
    bench.order({ do: 'stop', expiresAtMs: null });
    bench.take();
    bench.order({ do: 'dose', ml: 0.1 });
    bench.order({ do: 'prime', seconds: 1 });
    expect(bench.takeReceipts().map((receipt) => [receipt.outcome, receipt.why])).toEqual([
      ['refused', 'stopped'],
      ['refused', 'stopped'],
    ]);
    expect(bench.put({ kind: 'button', head: 1, ml: 0.1 }).refused).toBe('stopped');
    bench.pass(10 * 60_000 + 10_000);
    bench.order({ do: 'resume' });
    bench.pass(60_000);
    expect(bench.takeRuns()).toEqual([]);
  });

  it('ends the run of a relay that does not open any more', () => {
    const bench = scheduled();
    bench.stick(1);
    bench.order({ do: 'dose', ml: 0.5 });
    bench.pass(60_000);
    expect(bench.takeRuns().at(-1)).toMatchObject({ phase: 'running', ml: 60 });
    bench.put({ kind: 'schedule', payload: plan({ enabled: false }, 2) });
    expect(bench.headState()).toBe('dosing');
    bench.order({ do: 'stop', expiresAtMs: null });
    bench.pass(60_000);
    expect(bench.takeRuns().at(-1)).toMatchObject({ phase: 'ended', ml: 60 });
  });
});

describe('a dose order', () => {
  it('is answered at once and given, naming the order', () => {
    const bench = scheduled();
    const id = bench.order({ do: 'dose', ml: 1.5 });
    expect(bench.takeReceipts()).toEqual([expect.objectContaining({ order: id, outcome: 'done' })]);
    bench.pass(2_000);
    expect(bench.takeRuns().at(-1)).toMatchObject({ phase: 'ended', cause: 'order', order: id, ml: 1.5 });
  });

  it('primes for so many seconds at the rate of the schedule', () => {
    const bench = pumpBench();
    bench.put({ kind: 'schedule', payload: plan({ mlPerSecond: 0.5 }) });
    bench.order({ do: 'prime', seconds: 3 });
    bench.pass(5_000);
    expect(bench.takeRuns().at(-1)).toMatchObject({ phase: 'ended', cause: 'prime', ml: 1.5, onMs: 3_000 });
  });

  it.each([
    ['at its expiry', { do: 'dose', ml: 0.1, expiresAtMs: noonMs }, 'expired', undefined],
    ['without an expiry', { do: 'dose', ml: 0.1, expiresAtMs: null }, 'refused', 'expiry'],
    ['without a volume', { do: 'dose' }, 'refused', 'shape'],
    ['of nothing', { do: 'dose', ml: 0 }, 'refused', 'shape'],
    ['of less than nothing', { do: 'dose', ml: -1 }, 'refused', 'shape'],
    ['for an unknown head', { do: 'dose', ml: 0.1, head: 9 }, 'refused', 'head'],
    ['for a head that is not listed', { do: 'dose', ml: 0.1, head: 2 }, 'refused', 'disabled'],
    ['over its ceiling', { do: 'dose', ml: 5.1 }, 'refused', 'ceiling'],
    ['for a prime without seconds', { do: 'prime' }, 'refused', 'shape'],
    ['to resume, expired', { do: 'resume', expiresAtMs: noonMs - 1 }, 'expired', undefined],
  ] as const)('is not obeyed %s', (_case, order, outcome, why) => {
    const bench = scheduled();
    bench.order(order);
    expect(bench.takeReceipts()).toEqual([expect.objectContaining({ outcome, why })]);
    bench.pass(5_000);
    expect(bench.takeRuns()).toEqual([]);
  });

  it('is refused on a busy head', () => {
    const bench = scheduled();
    bench.order({ do: 'dose', ml: 3 });
    bench.order({ do: 'dose', ml: 1 });
    expect(bench.takeReceipts().map((receipt) => receipt.why)).toEqual([undefined, 'busy']);
  });

  it.each(['resume', 'dose', 'prime'] as const)('%s is refused while the clock is unset', (what) => {
    const bench = scheduled();
    bench.setClock(false);
    bench.order({ do: what, ml: 0.1, seconds: 1 });
    expect(bench.takeReceipts()).toEqual([expect.objectContaining({ outcome: 'refused', why: 'clock' })]);
  });

  it('cannot be answered without an id, and does nothing', () => {
    const bench = scheduled();
    for (const payload of [undefined, null, 'stop', {}, { do: 'stop', head: 1 }, { id: '' }]) bench.put({ kind: 'order', payload });
    expect(bench.take()).toEqual([]);
    expect(bench.headState()).toBe('idle');
  });
});

describe('a repeated order id', () => {
  it('gets the receipt that it had, and nothing else happens', () => {
    const bench = scheduled();
    bench.order({ id: 'once', do: 'dose', ml: 1 });
    bench.pass(2_000);
    const [first] = bench.takeReceipts();
    bench.order({ id: 'once', do: 'dose', ml: 1 });
    expect(bench.take()).toEqual([{ word: 'receipt', payload: first }]);
  });

  it('is known after a restart too', () => {
    const bench = scheduled();
    bench.order({ id: 'once', do: 'dose', ml: 1 });
    bench.pass(2_000);
    bench.restart(1_000);
    bench.take();
    bench.order({ id: 'once', do: 'dose', ml: 1 });
    expect(bench.takeRuns()).toEqual([]);
  });

  it('does not stop again what was resumed in between', () => {
    const bench = scheduled();
    bench.order({ id: 'stop-1', do: 'stop', expiresAtMs: null });
    bench.order({ id: 'resume-1', do: 'resume' });
    bench.order({ id: 'stop-1', do: 'stop', expiresAtMs: null });
    expect(bench.headState()).toBe('idle');
  });
});
