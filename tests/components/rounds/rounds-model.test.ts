import { describe, expect, it } from 'vitest';
import { inShownOrder, roundOf } from '../../../components/rounds/rounds-model.ts';
import { makeStatus, makeSystem, nowMs } from '../../helpers/client-fixtures.ts';

const items = (...ids: string[]) => ids.map((id) => ({ id }));

describe('the order of rounds', () => {
  it('stays as it is shown, and counts what moved', () => {
    expect(inShownOrder(['a', 'b', 'c'], items('c', 'a', 'b'))).toEqual({ shown: items('a', 'b', 'c'), moved: 3 });
    expect(inShownOrder(['a', 'b'], items('a', 'b'))).toEqual({ shown: items('a', 'b'), moved: 0 });
  });

  it('adds what is new at the end and drops what is gone', () => {
    expect(inShownOrder(['a', 'b'], items('c', 'b')).shown).toEqual(items('b', 'c'));
  });
});

describe('a round', () => {
  it('says the state as a shape and a word', () => {
    expect(roundOf(makeSystem(), nowMs, null)).toMatchObject({ mark: 'fine', word: 'quiet', rank: 'quiet' });
    expect(roundOf(makeSystem({ status: makeStatus({ offlineDevices: 1 }) }), nowMs, null)).toMatchObject({
      mark: 'unknown',
      word: 'unheard',
    });
  });

  it('does not say that dosing is stopped while a pump has not confirmed it', () => {
    const { sentence } = roundOf(makeSystem({ status: makeStatus({ stoppedHeads: 1, unconfirmedStops: 1 }) }), nowMs, null);
    expect(sentence).toContain('Dosing is asked to stop; the pump has not confirmed it.');
    expect(sentence).not.toContain('is stopped');
  });

  it('is never quiet from stale data, and keeps what does not go away by itself', () => {
    expect(roundOf(makeSystem(), nowMs, nowMs - 600_000).word).toBe('unheard');
    expect(roundOf(makeSystem({ status: makeStatus({ latched: true }) }), nowMs, nowMs - 600_000).word).toBe('to be reset');
    expect(roundOf(makeSystem({ status: makeStatus({ worstPriority: 'urgent' }) }), nowMs, nowMs - 600_000).word).toBe('urgent');
  });
});
