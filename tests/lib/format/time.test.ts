import { describe, expect, it } from 'vitest';
import { ageWords, formatAgo, formatClock, formatClockWithSeconds, formatDay, formatNear } from '../../../lib/format/time.ts';

const now = Date.parse('2026-03-08T14:02:07Z');
const zone = 'Europe/Lisbon';

describe('times of a site', () => {
  it('are in the zone of the site, whatever the browser has', () => {
    expect(formatClock('2026-07-01T12:00:00Z', 'Europe/Lisbon')).toBe('13:00');
    expect(formatClock('2026-07-01T12:00:00Z', 'Asia/Kathmandu')).toBe('17:45');
  });

  it('carry seconds where a pump answered', () => {
    expect(formatClockWithSeconds(now, zone)).toBe('14:02:07');
  });

  it('name the year only when it is another', () => {
    expect(formatDay('2026-03-09T10:00:00Z', zone, now)).toBe('9 March');
    expect(formatDay('2025-03-09T10:00:00Z', zone, now)).toBe('9 March 2025');
  });

  it.each([
    ['2026-03-08T13:52:00Z', '13:52'],
    ['2026-03-06T13:52:00Z', 'Friday 13:52'],
    ['2026-02-20T13:52:00Z', '20 February, 13:52'],
  ])('are as short as can be understood: %s', (time, text) => {
    expect(formatNear(time, zone, now)).toBe(text);
  });

  it.each([
    [-2000, 'just now'],
    [-12_000, '12 s ago'],
    [-4 * 60_000, '4 min ago'],
    [-3 * 3_600_000, '3 h ago'],
    [-25 * 3_600_000, '7 March, 13:02'],
    [30_000, 'just now'],
    [3_600_000, '8 March, 15:02'],
  ])('are relative below a day only (%d ms)', (offsetMs, text) => {
    expect(formatAgo(now + offsetMs, zone, now)).toBe(text);
  });

  it('counts days in words', () => {
    expect([ageWords(26 * 3_600_000), ageWords(49 * 3_600_000), ageWords(-5)]).toEqual(['1 day', '2 days', '0 s']);
  });
});
