import { describe, expect, it } from 'vitest';
import { timeTicks } from '../../../components/charts/time-ticks.ts';

const hourMs = 3_600_000;

function dayOf(zone: string, fromIso: string, toIso: string, count: number) {
  return timeTicks({ fromMs: Date.parse(fromIso), toMs: Date.parse(toIso) }, zone, count);
}
const at = (ticks: ReturnType<typeof timeTicks>) => ticks.map((tick) => `${new Date(tick.tMs).toISOString().slice(0, 16)}Z ${tick.label}`);

describe('timeTicks on an ordinary day', () => {
  it('stands at round hours of the site, not of UTC or the browser', () => {
    const ticks = dayOf('Asia/Kolkata', '2026-06-01T18:30:00Z', '2026-06-02T18:30:00Z', 4);
    expect(at(ticks)).toEqual([
      '2026-06-01T18:30Z Tue 2 Jun',
      '2026-06-02T00:30Z 06:00',
      '2026-06-02T06:30Z 12:00',
      '2026-06-02T12:30Z 18:00',
    ]);
  });
  it('never gives many more than were asked for', () => {
    for (const days of [0.05, 0.3, 1, 2, 5, 14, 40, 120, 400, 1500]) {
      const ticks = timeTicks({ fromMs: 1.75e12, toMs: 1.75e12 + days * 24 * hourMs }, 'Europe/Lisbon', 5);
      expect(ticks.length).toBeLessThanOrEqual(7);
      expect(ticks.length).toBeGreaterThanOrEqual(1);
    }
  });
  it('stays put while the range is panned', () => {
    const first = timeTicks({ fromMs: 1.75e12, toMs: 1.75e12 + 20 * 24 * hourMs }, 'America/New_York', 5).map((tick) => tick.tMs);
    const panned = timeTicks({ fromMs: 1.75e12 + 9e7, toMs: 1.75e12 + 9e7 + 20 * 24 * hourMs }, 'America/New_York', 5).map(
      (tick) => tick.tMs,
    );
    expect(panned.filter((tMs) => first.includes(tMs)).length).toBeGreaterThanOrEqual(panned.length - 1);
  });
  it('names months, and the year in January', () => {
    const ticks = dayOf('Europe/Lisbon', '2026-10-15T00:00:00Z', '2027-03-15T00:00:00Z', 6);
    expect(ticks.map((tick) => tick.label)).toEqual(['Nov', 'Dec', '2027', 'Feb', 'Mar']);
    expect(ticks.map((tick) => tick.strong)).toEqual([false, false, true, false, false]);
  });
  it('puts weekly ticks on Mondays', () => {
    const ticks = dayOf('Europe/Lisbon', '2026-05-31T22:00:00Z', '2026-07-05T00:00:00Z', 6);
    expect(ticks.map((tick) => new Date(tick.tMs + hourMs).getUTCDay())).toEqual([1, 1, 1, 1, 1]);
  });
});

describe('timeTicks where the clock goes forward', () => {
  it('leaves out the hour that does not exist in Lisbon, and keeps midnight where the day begins', () => {
    // 2026-03-29 01:00 WET becomes 02:00 WEST.
    const ticks = dayOf('Europe/Lisbon', '2026-03-29T00:00:00Z', '2026-03-29T05:00:00Z', 8);
    expect(at(ticks)).toEqual([
      '2026-03-29T00:00Z Sun 29 Mar',
      '2026-03-29T01:00Z 02:00',
      '2026-03-29T02:00Z 03:00',
      '2026-03-29T03:00Z 04:00',
      '2026-03-29T04:00Z 05:00',
    ]);
  });
  it('leaves out 02:00 in New York', () => {
    // 2026-03-08 02:00 EST becomes 03:00 EDT.
    const ticks = dayOf('America/New_York', '2026-03-08T05:00:00Z', '2026-03-08T10:00:00Z', 8);
    expect(ticks.map((tick) => tick.label)).toEqual(['Sun 8 Mar', '01:00', '03:00', '04:00', '05:00']);
    expect(ticks.every((tick, i) => i === 0 || tick.tMs - (ticks[i - 1]?.tMs ?? 0) === hourMs)).toBe(true);
  });
  it('leaves out the half hour that does not exist on Lord Howe Island', () => {
    // 2026-10-04 02:00 +10:30 becomes 02:30 +11.
    const ticks = dayOf('Australia/Lord_Howe', '2026-10-03T14:30:00Z', '2026-10-03T17:00:00Z', 6);
    expect(at(ticks)).toEqual([
      '2026-10-03T14:30Z 01:00',
      '2026-10-03T15:00Z 01:30',
      '2026-10-03T15:30Z 02:30',
      '2026-10-03T16:00Z 03:00',
      '2026-10-03T16:30Z 03:30',
    ]);
  });
});

describe('timeTicks where the clock goes back', () => {
  it('shows the repeated hour twice in Lisbon', () => {
    // 2026-10-25 02:00 WEST becomes 01:00 WET.
    const ticks = dayOf('Europe/Lisbon', '2026-10-24T23:00:00Z', '2026-10-25T04:00:00Z', 8);
    expect(at(ticks)).toEqual([
      '2026-10-24T23:00Z Sun 25 Oct',
      '2026-10-25T00:00Z 01:00',
      '2026-10-25T01:00Z 01:00 again',
      '2026-10-25T02:00Z 02:00',
      '2026-10-25T03:00Z 03:00',
    ]);
  });
  it('shows the repeated hour twice in New York', () => {
    const ticks = dayOf('America/New_York', '2026-11-01T04:00:00Z', '2026-11-01T09:00:00Z', 8);
    expect(ticks.map((tick) => tick.label)).toEqual(['Sun 1 Nov', '01:00', '01:00 again', '02:00', '03:00']);
  });
  it('shows the repeated half hour twice on Lord Howe Island', () => {
    // 2026-04-05 02:00 +11 becomes 01:30 +10:30.
    const ticks = dayOf('Australia/Lord_Howe', '2026-04-04T14:00:00Z', '2026-04-04T16:31:00Z', 6);
    expect(at(ticks)).toEqual([
      '2026-04-04T14:00Z 01:00',
      '2026-04-04T14:30Z 01:30',
      '2026-04-04T15:00Z 01:30 again',
      '2026-04-04T15:30Z 02:00',
      '2026-04-04T16:00Z 02:30',
      '2026-04-04T16:30Z 03:00',
    ]);
  });
  it.each(['Europe/Lisbon', 'America/New_York', 'Australia/Lord_Howe'])('puts each day of a year in %s at its own midnight', (zone) => {
    const yearStart = Date.parse('2026-01-01T12:00:00Z');
    for (let day = 0; day < 365; day += 5) {
      const fromMs = yearStart + day * 24 * hourMs;
      const ticks = timeTicks({ fromMs, toMs: fromMs + 5 * 24 * hourMs }, zone, 6);
      const clocks = ticks.map((tick) =>
        new Intl.DateTimeFormat('en-GB', { timeZone: zone, hour: '2-digit', minute: '2-digit' }).format(tick.tMs),
      );
      expect(clocks).toEqual(['00:00', '00:00', '00:00', '00:00', '00:00']);
    }
  });
});
