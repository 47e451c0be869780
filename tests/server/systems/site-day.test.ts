import { describe, expect, it } from 'vitest';
import { siteDay } from '../../../server/systems/site-day.ts';

const HOUR_MS = 3_600_000;
const at = (text: string) => Date.parse(text);

describe("the site's day", () => {
  it('runs from midnight to midnight of the site, not of UTC', () => {
    expect(siteDay('Europe/Lisbon', at('2026-07-01T23:30:00Z'))).toEqual({
      fromMs: at('2026-07-01T23:00:00Z'),
      toMs: at('2026-07-02T23:00:00Z'),
    });
    expect(siteDay('Asia/Kathmandu', at('2026-07-01T18:14:59Z')).toMs).toBe(at('2026-07-01T18:15:00Z'));
  });

  it('is 23 hours long when the clocks go forward and 25 when they go back', () => {
    const spring = siteDay('Europe/Berlin', at('2026-03-29T12:00:00Z'));
    const autumn = siteDay('Europe/Berlin', at('2026-10-25T12:00:00Z'));
    expect(spring).toEqual({ fromMs: at('2026-03-28T23:00:00Z'), toMs: at('2026-03-29T22:00:00Z') });
    expect(autumn.toMs - autumn.fromMs).toBe(25 * HOUR_MS);
  });

  it('begins when the clocks jump over midnight', () => {
    // Chile goes forward at 24:00, so that the day begins at 01:00.
    const day = siteDay('America/Santiago', at('2026-09-06T12:00:00Z'));
    expect(day.fromMs).toBe(at('2026-09-06T04:00:00Z'));
    expect(day.toMs - day.fromMs).toBe(23 * HOUR_MS);
  });
});
