import { describe, expect, it } from 'vitest';
import type { OrderOutcome } from '#shared/contract/control.ts';
import { resumeLine, stopLine, stopLines, stopState } from '../../../components/stop/stop-words.ts';
import { makeDevice, makeHead, nowMs, testId } from '../../helpers/client-fixtures.ts';

const order = (changed: Partial<OrderOutcome>): OrderOutcome => ({
  id: testId(60),
  deviceId: testId(40),
  head: 1,
  outcome: 'done',
  why: null,
  at: '2026-03-08T14:02:07Z',
  ...changed,
});
const say = (changed: Partial<OrderOutcome>, device = makeDevice('idle')) =>
  stopLine(order(changed), [makeHead()], [device], 'Europe/Lisbon');

describe('what a stop came to', () => {
  it('is the time at which the pump said that it stopped', () => {
    expect(say({})).toEqual({ orderId: testId(60), head: 'Doser, head 1', sentence: 'Stopped at the pump, 14:02:07', isStopped: true });
  });

  it.each([
    ['no-answer', null, "No answer. Pull the pump's plug; dry hands first."],
    ['expired', null, "No answer. Pull the pump's plug; dry hands first."],
    ['waiting', null, "The pump is away: it gets the stop when it is back. Pull the pump's plug; dry hands first."],
    ['refused', 'clock', "The pump refused: its clock is not set. Pull the pump's plug; dry hands first."],
  ] as const)('is never said to be a stop for %s', (outcome, why, sentence) => {
    expect(say({ outcome, why, at: null })).toMatchObject({ sentence, isStopped: false });
  });

  it('becomes a stop when the pump itself says so later', () => {
    expect(say({ outcome: 'no-answer', at: null }, makeDevice('stopped'))).toMatchObject({
      sentence: 'Stopped at the pump, 14:02:07',
      isStopped: true,
    });
  });

  it('does not take an old state of a pump that is away for an answer', () => {
    const away = makeDevice('stopped');
    const state = away.state === null ? null : { ...away.state, online: false };
    expect(say({ outcome: 'waiting', at: null }, { ...away, state }).isStopped).toBe(false);
  });

  it('names a head that nobody registered by its number', () => {
    expect(stopLine(order({ head: 7 }), [makeHead()], [], 'Europe/Lisbon').head).toBe('Head 7');
  });
});

describe('what a resume came to', () => {
  it('is a start only when the pump says so', () => {
    expect(resumeLine(order({}), [makeHead()]).sentence).toBe('Doses again from its next portion');
    expect(resumeLine(order({ outcome: 'refused', why: 'clock' }), [makeHead()]).isStopped).toBe(true);
    expect(resumeLine(order({ outcome: 'expired' }), [makeHead()]).sentence).toContain('stays stopped');
  });
});

describe('the state of dosing', () => {
  const asked = '2026-03-08T13:15:00Z';
  const stop = (confirmedAt: string | null) => ({ cause: 'person' as const, alarmId: null, at: asked, confirmedAt });
  const lines = (...heads: Parameters<typeof makeHead>[0][]) => stopLines(heads.map(makeHead), 'Europe/Lisbon', nowMs);

  it('counts carbon heads only, and which of them the pump has not confirmed', () => {
    const state = stopState([
      makeHead({ id: 'a', stop: stop('2026-03-08T13:15:01Z') }),
      makeHead({ id: 'b', stop: stop(null) }),
      makeHead({ id: 'c' }),
      makeHead({ id: 'd', kind: 'other', stop: stop(null) }),
    ]);
    expect([state.stopped.map(({ id }) => id), state.unconfirmed.map(({ id }) => id)]).toEqual([['a', 'b'], ['b']]);
  });

  it('is what the pump said, when it said it', () => {
    expect(lines({ stop: stop('2026-03-08T14:02:07Z') })).toEqual([
      { headId: testId(50), words: 'Stopped at the pump, 14:02:07', isConfirmed: true },
    ]);
    expect(lines({ stop: stop('2026-03-07T14:02:07Z') })[0]?.words).toBe('Stopped at the pump, Saturday 14:02');
  });

  it('is a wish while the pump has not answered, and says what to do', () => {
    expect(lines({ stop: stop(null) })).toEqual([
      { headId: testId(50), words: "Asked at 13:15, no answer yet. Pull the pump's plug; dry hands first.", isConfirmed: false },
    ]);
  });

  it('names the heads where there are more, those without an answer first', () => {
    const two = lines({ id: 'a', stop: stop('2026-03-08T14:02:07Z') }, { id: 'b', head: 2, stop: stop(null) }, { id: 'c', head: 3 });
    expect(two.map(({ words }) => words)).toEqual([
      "Doser, head 2: Asked at 13:15, no answer yet. Pull the pump's plug; dry hands first.",
      'Doser, head 1: Stopped at the pump, 14:02:07',
    ]);
  });
});
