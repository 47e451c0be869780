import { describe, expect, it } from 'vitest';
import { alarmCodes } from '../../../shared/domain/alarm-codes.ts';
import { comparePriority, priorities } from '../../../shared/domain/alarm-priority.ts';
import { alarmRuleDefaults, longestShelfMs, mainPriority, priorityOf } from '../../../shared/domain/alarm-rules.ts';
import { firstAdvice } from '../../../shared/domain/first-advice.ts';

describe('the default rules', () => {
  it('stop the pump for volumes past hard and for a run that does not end, and for nothing else', () => {
    expect(alarmCodes.filter((code) => alarmRuleDefaults[code].interlock)).toEqual([
      'volume-hour',
      'volume-day',
      'volume-week',
      'run-too-long',
    ]);
  });

  it('press harder past hard than past soft', () => {
    expect(priorityOf('volume-day', 'hard', mainPriority('volume-day'))).toBe('urgent');
    expect(priorityOf('volume-day', 'soft', mainPriority('volume-day'))).toBe('medium');
    expect(priorityOf('run-too-long', 'hard', mainPriority('run-too-long'))).toBe('urgent');
    expect(priorityOf('device-offline', 'soft', mainPriority('device-offline'))).toBe('medium');
  });

  it('never let soft press more than the rule', () => {
    for (const code of alarmCodes) {
      for (const priority of priorities) {
        expect(comparePriority(priorityOf(code, 'soft', priority), priority)).toBeLessThanOrEqual(0);
        expect(priorityOf(code, 'hard', priority)).toBe(priority);
      }
    }
    expect(priorityOf('volume-day', 'soft', 'low')).toBe('low');
    expect(priorityOf('device-offline', 'soft', 'high')).toBe('high');
  });

  it('let an interlock be shelved for 8 h and others for 7 days', () => {
    expect(longestShelfMs(true)).toBe(8 * 3_600_000);
    expect(longestShelfMs(false)).toBe(7 * 86_400_000);
  });
});

describe('first advice', () => {
  it('is there for every code and limit, each step once', () => {
    for (const code of alarmCodes) {
      for (const limitKind of ['soft', 'hard'] as const) {
        const steps = firstAdvice(code, limitKind).map((step) => step.code);
        expect(steps.length).toBeGreaterThan(0);
        expect(new Set(steps).size).toBe(steps.length);
      }
    }
  });

  it('has hands, line, plug and air before the app when carbon may be running in', () => {
    for (const code of ['volume-hour', 'volume-day', 'volume-week', 'run-too-long'] as const) {
      const steps = firstAdvice(code, 'hard').map((step) => step.code);
      expect(steps.slice(0, 3)).toEqual(['dry-hands', 'lift-delivery-line', 'unplug-pump-at-dry-point']);
      expect(steps.indexOf('add-air-now')).toBeLessThan(steps.indexOf('stop-in-app'));
      expect(steps.indexOf('stop-in-app')).toBeLessThan(steps.indexOf('call-for-help'));
    }
  });
});
