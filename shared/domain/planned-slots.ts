import type { ScheduleHead } from '../mqtt/payloads.ts';

/** A schedule as it was published for one device. It counts from `fromMs` until the next one does. */
export interface PublishedSchedule {
  fromMs: number;
  version: number;
  heads: readonly ScheduleHead[];
}

export interface PlannedSlot {
  head: number;
  dueMs: number;
  ml: number;
  version: number;
}

/** A slot that stands in a schedule, whether its head may dose or is kept stopped, with what the pump refuses above. */
export interface ScheduledSlot extends PlannedSlot {
  enabled: boolean;
  maxMlPerHour: number;
  maxMlPerDay: number;
}

const MINUTE_MS = 60_000;
const DAY_MS = 86_400_000;

/**
 * Every slot that the schedules of one device hold with a due time in (`fromMs`, `toMs`], those of disabled heads
 * included, ascending by due time and head.
 *
 * A version counts in (its `fromMs`, the next one's `fromMs`]: after a new version only slots due later run, so a slot
 * due at the very moment of the change still belongs to the version before.
 *
 * @param history ascending by `fromMs`, then by version; of two from the same moment the later one counts.
 */
export function scheduledSlots(history: readonly PublishedSchedule[], fromMs: number, toMs: number): ScheduledSlot[] {
  const slots: ScheduledSlot[] = [];
  for (const [index, schedule] of history.entries()) {
    const afterMs = Math.max(fromMs, schedule.fromMs);
    const untilMs = Math.min(toMs, history[index + 1]?.fromMs ?? Number.POSITIVE_INFINITY);
    for (let dayMs = Math.floor(afterMs / DAY_MS) * DAY_MS; dayMs <= untilMs; dayMs += DAY_MS) {
      for (const head of schedule.heads) {
        for (const minute of head.slotsUtcMin) {
          const dueMs = dayMs + minute * MINUTE_MS;
          if (dueMs <= afterMs || dueMs > untilMs) continue;
          slots.push({
            head: head.head,
            dueMs,
            ml: head.slotMl,
            version: schedule.version,
            enabled: head.enabled,
            maxMlPerHour: head.maxMlPerHour,
            maxMlPerDay: head.maxMlPerDay,
          });
        }
      }
    }
  }
  return slots.sort((one, other) => one.dueMs - other.dueMs || one.head - other.head);
}

/**
 * The slots that one device is planned to give with a due time in (`fromMs`, `toMs`], ascending; a disabled head gives none.
 *
 * Example: a version from 08:30 with slots of 0.5 mL at 08:00, 10:00 and 12:00 UTC plans 0.5 mL in (08:00, 10:00].
 *
 * @param history ascending by `fromMs`, as for {@link scheduledSlots}.
 */
export function plannedSlots(history: readonly PublishedSchedule[], fromMs: number, toMs: number): PlannedSlot[] {
  return scheduledSlots(history, fromMs, toMs)
    .filter((slot) => slot.enabled)
    .map(({ head, dueMs, ml, version }) => ({ head, dueMs, ml, version }));
}
