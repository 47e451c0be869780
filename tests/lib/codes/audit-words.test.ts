import { describe, expect, it } from 'vitest';
import type { AuditEntry } from '#shared/contract/sites.ts';
import { auditSentence } from '../../../lib/codes/audit-words.ts';

const entry = (given: Partial<AuditEntry>): AuditEntry => ({
  seq: 1,
  at: '2026-12-01T09:00:00Z',
  actorKind: 'user',
  actorId: 'keeper',
  actorName: 'Keeper',
  action: 'create',
  entity: 'test',
  entityId: 'one',
  before: null,
  after: null,
  ...given,
});
const nitrate = { quantity: 'nitrate', value: 22, unit: 'mg/L NO3', below: false };

describe('who did what', () => {
  it.each<[string, Partial<AuditEntry>]>([
    ['Keeper wrote down nitrate 22 mg/L NO3.', { after: nitrate }],
    [
      'Keeper corrected nitrate 22 mg/L NO3 to nitrate under 2 mg/L NO3.',
      { action: 'update', before: nitrate, after: { ...nitrate, value: 2, below: true } },
    ],
    ['Keeper deleted nitrate 22 mg/L NO3.', { action: 'delete', before: nitrate }],
    ['Keeper invited sitter@reef.example as sitter.', { entity: 'invite', after: { email: 'sitter@reef.example', role: 'sitter' } }],
    [
      'Keeper changed a member from sitter to keeper.',
      { entity: 'membership', action: 'update', before: { role: 'sitter' }, after: { role: 'keeper' } },
    ],
    [
      'Keeper scheduled 6.3 mL a day for a head, 4.2 mL before.',
      { entity: 'head', action: 'schedule', before: { mlPerDay: 4.2 }, after: { mlPerDay: 6.3 } },
    ],
    [
      'Keeper scheduled 9.0 mL a day for a head: agreed with the owner.',
      { entity: 'head', action: 'schedule', after: { mlPerDay: 9, overrideReason: 'agreed with the owner' } },
    ],
    [
      'Keeper reset "Too much carbon in a day": the timer was doubled.',
      { entity: 'alarm', action: 'reset', after: { code: 'volume-day', reason: 'the timer was doubled' } },
    ],
    ['Keeper changed the limit "Too much carbon in an hour".', { entity: 'alarmRule', action: 'update', entityId: 'system/volume-hour/' }],
    ['Keeper refilled a bottle to 500 mL.', { entity: 'refill', after: { ml: 500 } }],
  ])('says "%s"', (sentence, given) => {
    expect(auditSentence(entry(given))).toBe(sentence);
  });

  it('names the server itself, a device, and somebody who is not there any more', () => {
    const stop = { entity: 'head', action: 'stop', after: { head: 2, cause: 'interlock' } };
    expect(auditSentence(entry({ ...stop, actorKind: 'system', actorName: null }))).toBe('Steadfall stopped head 2, by an alarm.');
    expect(auditSentence(entry({ ...stop, actorKind: 'device', actorName: null }))).toMatch(/^A device /);
    expect(auditSentence(entry({ ...stop, actorName: null }))).toMatch(/^Somebody who is gone /);
  });

  it('shows what it does not know by its code, and never more than was written down', () => {
    expect(auditSentence(entry({ entity: 'weather', action: 'foretell', after: 'rain' }))).toBe('Keeper foretell: weather.');
    expect(auditSentence(entry({ after: { quantity: 'nitrate' } }))).toBe('Keeper wrote down a test.');
    expect(auditSentence(entry({ entity: 'alarm', action: 'reset', after: { code: 'new-code' } }))).toBe('Keeper reset an alarm.');
  });
});
