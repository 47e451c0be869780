import { describe, expect, it } from 'vitest';
import type { Alarm } from '#shared/contract/alarms.ts';
import { alarmSentence } from '../../../components/alarms/alarm-sentence.ts';
import { evidenceDoses, evidenceRows } from '../../../components/alarms/evidence-rows.ts';

const nowMs = Date.parse('2026-03-01T14:00:00Z');
const alarm: Alarm = {
  id: '0198f000-0000-7000-8000-000000000001',
  code: 'volume-day',
  siteId: '0198f000-0000-7000-8000-000000000002',
  systemId: '0198f000-0000-7000-8000-000000000003',
  target: 'system',
  limitKind: 'hard',
  priority: 'urgent',
  state: 'unacknowledged',
  active: true,
  acknowledged: false,
  latched: true,
  shelvedUntil: null,
  raisedAt: '2026-03-01T13:58:00Z',
  returnedAt: null,
  value: 11.2,
  limit: 10.5,
  unit: 'mL',
  evidence: {
    windowFrom: '2026-02-28T13:58:00Z',
    windowTo: '2026-03-01T13:58:00Z',
    givenMl: 11.2,
    plannedMl: 8.4,
    ceilingMlPerDay: null,
    doses: [
      { at: '2026-03-01T10:00:00Z', ml: 0.7, source: 'run', sourceId: 'd/1', cause: 'schedule', head: 1, onStoppedHead: false },
      { at: '2026-03-01T13:57:59Z', ml: 2, source: 'hand', sourceId: 'h', cause: null, head: null, onStoppedHead: false },
    ],
  },
  taken: null,
};

describe('the sentence of an alarm', () => {
  it('says how much, in which window, over which limit', () => {
    expect(alarmSentence(alarm, 'UTC', nowMs)).toBe('11.2 mL of carbon within 24 hours, over the hard limit of 10.5 mL.');
  });

  it('does not invent a limit where nothing was planned', () => {
    expect(alarmSentence({ ...alarm, limit: null }, 'UTC', nowMs)).toContain('while nothing was planned');
  });

  it('tells a run that gave too much from one that ran too long', () => {
    const run: Alarm = { ...alarm, code: 'run-too-long', evidence: { head: 2 } };
    expect(alarmSentence({ ...run, value: 1.2, limit: 0.8, unit: 'mL' }, 'UTC', nowMs)).toContain('Head 2 gave 1.2 mL in one portion');
    expect(alarmSentence({ ...run, value: 42, limit: 11, unit: 's' }, 'UTC', nowMs)).toContain('running for 42 s');
  });

  it('says of a pump that it keeps its own schedule', () => {
    const evidence = { deviceName: 'Doser', deviceKind: 'pump', offlineSince: '2026-03-01T13:52:00Z' };
    const sentence = alarmSentence({ ...alarm, code: 'device-offline', evidence }, 'UTC', nowMs);
    expect(sentence).toBe('Doser has not been heard since 13:52. A pump keeps its own schedule.');
  });
});

describe('the evidence of an alarm', () => {
  it('lists what is known and leaves out what is not', () => {
    const labels = evidenceRows(alarm, 'UTC', nowMs).map((row) => row.label);
    expect(labels).toEqual(['Window from', 'Window to', 'Given', 'Planned in the window']);
  });

  it('lists the doses newest first, by hand apart', () => {
    expect(evidenceDoses(alarm, 'UTC')).toEqual([
      { key: 'h', time: '13:57:59', ml: '2.0 mL', source: 'by hand' },
      { key: 'd/1', time: '10:00:00', ml: '0.70 mL', source: 'head 1, schedule' },
    ]);
  });
});
