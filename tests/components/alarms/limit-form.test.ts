import { describe, expect, it } from 'vitest';
import type { AlarmRule } from '#shared/contract/alarms.ts';
import { limitFormOf, readLimitForm } from '../../../components/alarms/limit-form.ts';
import { limitSentence, scheduleLimitsSentence } from '../../../components/alarms/limit-words.ts';

const rule: AlarmRule = {
  code: 'volume-day',
  target: 'system',
  enabled: true,
  priority: 'urgent',
  soft: null,
  hard: null,
  unit: 'mL',
  interlock: true,
  onDelaySeconds: 0,
  offDelaySeconds: 0,
  deadband: 0,
  isDefault: true,
  effectiveSoft: 9.24,
  effectiveHard: 10.5,
  fromSchedule: { planned: 8.4, soft: 9.24, hard: 10.5 },
  current: 4.3,
};

describe('the limit editor', () => {
  it('opens with the limits that hold, and says that they come from the schedule', () => {
    expect(limitFormOf(rule)).toEqual({ fromSchedule: true, softText: '9.24', hardText: '10.5', enabled: true, interlock: true });
  });

  it('saves no numbers while the limits follow the schedule', () => {
    const read = readLimitForm(rule, limitFormOf(rule));
    expect(read).toEqual({ ok: true, body: { target: 'system', enabled: true, soft: null, hard: null, interlock: true } });
  });

  it('reads a decimal comma', () => {
    const read = readLimitForm(rule, { ...limitFormOf(rule), fromSchedule: false, softText: '3,5', hardText: '4' });
    expect(read).toMatchObject({ ok: true, body: { soft: 3.5, hard: 4 } });
  });

  it.each([
    ['5', '4', { soft: 'The soft limit must be under the hard limit' }],
    ['4', '4', { soft: 'The soft limit must be under the hard limit' }],
    ['0', '4', { soft: 'A limit must be above 0' }],
    ['', 'x', { soft: 'Give a number', hard: 'Use digits only, such as 0.08' }],
  ])('refuses soft "%s" with hard "%s" and says why', (softText, hardText, errors) => {
    const read = readLimitForm(rule, { ...limitFormOf(rule), fromSchedule: false, softText, hardText });
    expect(read).toEqual({ ok: false, errors });
  });
});

describe('the sentence of a limit', () => {
  it('says what was counted and where the limits come from', () => {
    expect(limitSentence(rule)).toBe('4.3 mL now; soft 9.2 mL, hard 10.5 mL, from the schedule.');
    expect(limitSentence({ ...rule, hard: 10.5 })).toContain('set by hand');
  });

  it('does not hide that a limit is off, or that nothing is planned', () => {
    expect(limitSentence({ ...rule, enabled: false })).toContain('Switched off');
    expect(limitSentence({ ...rule, effectiveSoft: null, effectiveHard: null })).toContain('any delivery');
  });
});

describe("what numbers of one's own stand beside", () => {
  it('is what was planned and given, and the limits that would follow', () => {
    expect(scheduleLimitsSentence({ ...rule, soft: 2, hard: 3, effectiveSoft: 2, effectiveHard: 3 })).toBe(
      '8.4 mL planned and 4.3 mL given in the last 24 h. From the schedule it would be soft 9.2 mL, hard 10.5 mL.',
    );
  });

  it('says that nothing follows without a schedule, and is silent where nothing is counted', () => {
    const bare = { ...rule, fromSchedule: { planned: 0, soft: null, hard: null } };
    expect(scheduleLimitsSentence(bare)).toContain('Without a schedule no limit follows from it.');
    expect(scheduleLimitsSentence({ ...rule, fromSchedule: null, current: null })).toBeNull();
  });
});
