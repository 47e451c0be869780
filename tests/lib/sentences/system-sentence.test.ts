import { describe, expect, it } from 'vitest';
import { countSentence } from '../../../lib/sentences/system-rank.ts';
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

  it.each([
    [
      { stoppedHeads: 1, unconfirmedStops: 1 },
      "Dosing is asked to stop; the pump has not confirmed it. Pull the pump's plug; dry hands first.",
    ],
    [{ stoppedHeads: 1, unconfirmedStops: 1, latched: true }, 'Dosing is asked to stop by an alarm; the pump has not confirmed it.'],
    [{ stoppedHeads: 3, unconfirmedStops: 2, carbonHeads: 3 }, 'Dosing is asked to stop; 2 of 3 heads are not confirmed.'],
  ])('claims no stop that the pump has not confirmed: %j', (changed, sentence) => {
    const said = systemSentence(makeSystem({ status: makeStatus(changed) }), nowMs, null);
    expect(said).toContain(sentence);
    expect(said).not.toMatch(/(is|are) stopped/);
  });

  it('says that devices are not heard', () => {
    expect(systemSentence(makeSystem({ status: makeStatus({ offlineDevices: 2 }) }), nowMs, null)).toContain('2 devices are not heard');
  });
});

describe('the count of systems', () => {
  it('goes from the worst, without the empty ones', () => {
    expect(countSentence(['quiet', 'urgent', 'quiet', 'unheard', 'latched'])).toBe(
      '5 systems: 1 urgent, 1 to be reset, 1 unheard, 2 quiet',
    );
    expect(countSentence(['alarm'])).toBe('1 system: 1 with an alarm');
    expect(countSentence([])).toBe('0 systems');
  });

  it('puts alarms together, whatever their priority', () => {
    expect(countSentence(['alarm', 'unheard', 'high'])).toBe('3 systems: 2 with alarms, 1 unheard');
  });
});
