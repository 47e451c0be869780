import * as fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import { plannedSlots, scheduledSlots, type PublishedSchedule } from '../../../shared/domain/planned-slots.ts';
import type { ScheduleHead } from '../../../shared/mqtt/payloads.ts';

const HOUR_MS = 3_600_000;
const DAY_MS = 24 * HOUR_MS;
const dayMs = Date.parse('2026-03-01T00:00:00Z');

function head(slotsUtcMin: number[], more: Partial<ScheduleHead> = {}): ScheduleHead {
  const slotMl = more.slotMl ?? 0.5;
  return { head: 1, enabled: true, slotMl, slotsUtcMin, mlPerSecond: 1, maxMlPerRun: 1, maxMlPerHour: 1, maxMlPerDay: 9, ...more };
}

const dueHours = (history: PublishedSchedule[], fromMs: number, toMs: number) =>
  plannedSlots(history, fromMs, toMs).map((slot) => (slot.dueMs - dayMs) / HOUR_MS);

describe('planned slots', () => {
  const history = [{ fromMs: dayMs - DAY_MS, version: 7, heads: [head([480, 600, 720])] }];

  it('repeats the minutes of the UTC day on every day of the window', () => {
    expect(dueHours(history, dayMs, dayMs + 2 * DAY_MS)).toEqual([8, 10, 12, 32, 34, 36]);
  });

  it('leaves out a slot due at the start of the window and takes one due at its end', () => {
    expect(dueHours(history, dayMs + 8 * HOUR_MS, dayMs + 12 * HOUR_MS)).toEqual([10, 12]);
  });

  it('runs only slots due later than a new version, and leaves one due at the change to the version before', () => {
    const changed = [...history, { fromMs: dayMs + 10 * HOUR_MS, version: 8, heads: [head([480, 600, 720, 840], { slotMl: 0.7 })] }];
    const slots = plannedSlots(changed, dayMs, dayMs + DAY_MS);
    expect(slots.map((slot) => [(slot.dueMs - dayMs) / HOUR_MS, slot.ml, slot.version])).toEqual([
      [8, 0.5, 7],
      [10, 0.5, 7],
      [12, 0.7, 8],
      [14, 0.7, 8],
    ]);
  });

  it('counts the later of two versions from the same moment', () => {
    const twice = [...history, { fromMs: dayMs, version: 8, heads: [head([60])] }, { fromMs: dayMs, version: 9, heads: [head([120])] }];
    expect(dueHours(twice, dayMs, dayMs + DAY_MS)).toEqual([2]);
  });

  it('plans nothing before the first version', () => {
    expect(dueHours(history, dayMs - 3 * DAY_MS, dayMs - DAY_MS)).toEqual([]);
  });

  it('plans nothing for a disabled head, and still tells the slots that it would have had', () => {
    const stopped = [{ fromMs: dayMs - 1, version: 7, heads: [head([480], { enabled: false })] }];
    expect(plannedSlots(stopped, dayMs, dayMs + DAY_MS)).toEqual([]);
    expect(scheduledSlots(stopped, dayMs, dayMs + DAY_MS)).toMatchObject([{ head: 1, enabled: false, dueMs: dayMs + 8 * HOUR_MS }]);
  });
});

describe('planned slots of any history', () => {
  const minutesArbitrary = fc.uniqueArray(fc.integer({ min: 0, max: 1439 }), { maxLength: 12 }).map((all) => all.sort((a, b) => a - b));
  const headsArbitrary = fc.uniqueArray(
    fc.record({ number: fc.integer({ min: 1, max: 3 }), minutes: minutesArbitrary, enabled: fc.boolean() }),
    {
      selector: (entry) => entry.number,
      maxLength: 3,
    },
  );
  const momentArbitrary = fc.integer({ min: 0, max: 4 * DAY_MS }).map((offsetMs) => dayMs + offsetMs);
  const historyArbitrary = fc.array(fc.record({ fromMs: momentArbitrary, heads: headsArbitrary }), { maxLength: 5 }).map((entries) =>
    entries
      .sort((one, other) => one.fromMs - other.fromMs)
      .map((entry, index) => ({
        fromMs: entry.fromMs,
        version: index + 1,
        heads: entry.heads.map((one) => head(one.minutes, { head: one.number, enabled: one.enabled })),
      })),
  );
  const windowArbitrary = fc
    .tuple(momentArbitrary, momentArbitrary)
    .map(([one, other]) => [Math.min(one, other), Math.max(one, other)] as const);

  it('splits at any moment without losing or doubling a slot', () => {
    fc.assert(
      fc.property(historyArbitrary, windowArbitrary, momentArbitrary, (history, [fromMs, toMs], cutMs) => {
        const middleMs = Math.min(Math.max(cutMs, fromMs), toMs);
        expect([...plannedSlots(history, fromMs, middleMs), ...plannedSlots(history, middleMs, toMs)]).toEqual(
          plannedSlots(history, fromMs, toMs),
        );
      }),
    );
  });

  it('agrees with asking every minute of the window which version counts there', () => {
    fc.assert(
      fc.property(historyArbitrary, windowArbitrary, (history, [fromMs, toMs]) => {
        const expected: string[] = [];
        for (let dueMs = Math.ceil(fromMs / 60_000) * 60_000; dueMs <= toMs; dueMs += 60_000) {
          if (dueMs <= fromMs) continue;
          const inForce = history.findLast((schedule) => schedule.fromMs < dueMs);
          const minute = ((dueMs - dayMs) / 60_000) % 1440;
          for (const one of inForce?.heads ?? []) {
            if (one.enabled && one.slotsUtcMin.includes(minute)) expected.push(`${dueMs} ${one.head} ${inForce?.version}`);
          }
        }
        const found = plannedSlots(history, fromMs, toMs).map((slot) => `${slot.dueMs} ${slot.head} ${slot.version}`);
        expect(found.sort()).toEqual(expected.sort());
      }),
      { numRuns: 60 },
    );
  });
});
