import { describe, expect, it } from 'vitest';
import { rankOf, countSentence } from '../../../lib/sentences/system-rank.ts';
import { doseSentence, nutrientsSentence, systemSentence } from '../../../lib/sentences/system-sentence.ts';
import { makeStatus, makeSystem, nowMs } from '../../helpers/client-fixtures.ts';

const daysAgo = (days: number) => new Date(nowMs - days * 86_400_000).toISOString();

describe('the dose', () => {
  it.each([
    [{}, '3.5 of 6.0 mL given so far, as planned.'],
    [{ givenTodayMl: 3.0 }, '3.0 of 6.0 mL given so far, as planned.'],
    [{ givenTodayMl: 4.6 }, '4.6 of 6.0 mL given so far, 1.1 mL more than planned by now.'],
    [{ givenTodayMl: 2.5 }, '2.5 of 6.0 mL given so far, 1.0 mL less than planned by now.'],
    [{ plannedSoFarMl: null }, '3.5 of 6.0 mL given so far.'],
    [{ plannedTodayMl: null, plannedSoFarMl: null }, '3.5 mL given today; nothing is planned.'],
    [{ plannedTodayMl: null, plannedSoFarMl: null, givenTodayMl: 0 }, 'No dose is planned.'],
    [{ plannedTodayMl: 0, plannedSoFarMl: 0, givenTodayMl: 0, carbonHeads: 0 }, 'No carbon pump yet.'],
  ])('is said as %j', (changed, sentence) => {
    expect(doseSentence(makeStatus(changed))).toBe(sentence);
  });
});

describe('the nutrients', () => {
  it('name the aim only when a result is outside it', () => {
    expect(nutrientsSentence(makeStatus(), nowMs)).toBe('Nitrate 12, aim 3 to 10. Phosphate 0.05, in band.');
  });

  it('say when a result is old', () => {
    const status = makeStatus({ nitrate: { at: daysAgo(20), canonicalMgPerL: 7, below: false } });
    expect(nutrientsSentence(status, nowMs)).toContain('Nitrate 7, in band, tested 20 days ago.');
  });

  it('keep "under" for a result below detection', () => {
    const status = makeStatus({ phosphate: { at: daysAgo(1), canonicalMgPerL: 0.02, below: true } });
    expect(nutrientsSentence(status, nowMs)).toContain('Phosphate under 0.02, aim 0.03 to 0.10.');
  });

  it('say that there is no test', () => {
    expect(nutrientsSentence(makeStatus({ nitrate: null, phosphate: null }), nowMs)).toBe('No test yet.');
    expect(nutrientsSentence(makeStatus({ nitrate: null }), nowMs)).toContain('No nitrate test yet.');
  });
});

describe('the sentence of a system', () => {
  it('is the dose and the nutrients when nothing is wrong', () => {
    expect(systemSentence(makeSystem(), nowMs, null)).toBe(
      '3.5 of 6.0 mL given so far, as planned. Nitrate 12, aim 3 to 10. Phosphate 0.05, in band.',
    );
  });

  it('says nothing but that we cannot tell when the data is stale', () => {
    const since = Date.parse('2026-03-08T13:52:00Z');
    expect(systemSentence(makeSystem(), nowMs, since)).toBe("We can't tell since 13:52. The pump keeps its own schedule.");
  });

  it('says first what is wrong', () => {
    const status = makeStatus({ worstPriority: 'urgent', openAlarms: 1, latched: true, stoppedHeads: 1 });
    expect(systemSentence(makeSystem({ status }), nowMs, null)).toMatch(/^One urgent alarm\. Dosing is stopped by an alarm\. 3\.5 of/);
  });

  it('tells a part of the heads from all of them', () => {
    const status = makeStatus({ stoppedHeads: 1, carbonHeads: 2 });
    expect(systemSentence(makeSystem({ status }), nowMs, null)).toContain('1 of 2 carbon heads are stopped.');
  });

  it('says that devices are not heard', () => {
    expect(systemSentence(makeSystem({ status: makeStatus({ offlineDevices: 2 }) }), nowMs, null)).toContain('2 devices are not heard');
  });
});

describe('the rank of a system', () => {
  it.each([
    [{}, 'quiet'],
    [{ worstPriority: 'urgent' as const, openAlarms: 1 }, 'urgent'],
    [{ latched: true }, 'urgent'],
    [{ worstPriority: 'high' as const, openAlarms: 1, offlineDevices: 1 }, 'alarm'],
    [{ worstPriority: 'medium' as const, openAlarms: 1, offlineDevices: 1 }, 'unheard'],
    [{ worstPriority: 'low' as const, openAlarms: 1 }, 'alarm'],
    [{ stoppedHeads: 1 }, 'due'],
    [{ nitrate: null }, 'due'],
    [{ phosphate: { at: daysAgo(8), canonicalMgPerL: 0.05, below: false } }, 'due'],
  ])('of %j is %s', (changed, rank) => {
    expect(rankOf(makeStatus(changed), nowMs)).toBe(rank);
  });

  it('is counted from the worst, without the empty ones', () => {
    expect(countSentence(['quiet', 'urgent', 'quiet', 'unheard'])).toBe('4 systems: 1 urgent, 1 unheard, 2 quiet');
    expect(countSentence(['alarm'])).toBe('1 system: 1 with an alarm');
    expect(countSentence([])).toBe('0 systems');
  });
});
