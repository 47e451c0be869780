/** The rolling windows in which the carbon given to a system is limited. */
export const volumeWindows = ['hour', 'day', 'week'] as const;
export type VolumeWindow = (typeof volumeWindows)[number];

/** Length of a window, ms. */
export const volumeWindowMs: Record<VolumeWindow, number> = { hour: 3_600_000, day: 86_400_000, week: 604_800_000 };

/** Days of a window that the ceiling is multiplied with; null where the ceiling does not apply. */
const ceilingDays: Record<VolumeWindow, number | null> = { hour: null, day: 1, week: 7 };

/** What was planned in one window. */
export interface PlannedWindow {
  /** Volume planned in that very window by the schedules in force, mL. */
  plannedMl: number;
  /** The largest slot of the schedules in force in the window, mL; null when none was in force. */
  largestSlotMl: number | null;
  /** The label's dose, or the written override, mL per day; null when unknown. */
  ceilingMlPerDay: number | null;
}

/** Numbers that a keeper set, mL; null means from the plan. */
export interface LimitNumbers {
  softMl: number | null;
  hardMl: number | null;
}

/**
 * Soft and hard limit of the carbon given in one rolling window, mL.
 *
 * With P planned in the window, s the largest slot and C the ceiling times the days of the window:
 * soft = P + max(s, 0.1 P), hard = P + max(2 s, 0.25 P), and for day and week hard is never above
 * max(1.25 C, soft + s/10). A keeper's number takes the place of the formula.
 *
 * Without a schedule in the window and without a number a limit is null: then any pump run passes soft, and one begun on
 * a stopped head passes hard.
 *
 * Soft is always under hard: a number that no longer fits the plan (the schedule changed after it was set) makes soft
 * give way, never hard.
 *
 * @example volumeLimits('day', { plannedMl: 8.4, largestSlotMl: 0.7, ceilingMlPerDay: 8.4 }, { softMl: null, hardMl: null })
 * // soft 9.24, hard 10.5 (both 8.4 + 0.25 x 8.4 and 1.25 x 8.4)
 */
export function volumeLimits(window: VolumeWindow, planned: PlannedWindow, numbers: LimitNumbers): LimitNumbers {
  const fromPlan = limitsFromPlan(window, planned);
  const hardMl = numbers.hardMl ?? fromPlan.hardMl;
  const softMl = numbers.softMl ?? fromPlan.softMl;
  if (softMl === null || hardMl === null || softMl < hardMl) return { softMl, hardMl };
  const roomMl = hardMl - planned.plannedMl;
  const halfwayMl = planned.plannedMl + roomMl / 2;
  // Of two numbers a hair apart halfway is one of them.
  return { softMl: roomMl > 0 && halfwayMl < hardMl ? halfwayMl : 0.9 * hardMl, hardMl };
}

/**
 * The hard limit that a ceiling alone gives: a quarter above it, mL; null for the hour, where the ceiling does not apply.
 * @param ceilingMlPerDay the label's dose or the written override, mL per day.
 */
export function hardAtCeilingMl(window: VolumeWindow, ceilingMlPerDay: number): number | null {
  const days = ceilingDays[window];
  return days === null ? null : 1.25 * ceilingMlPerDay * days;
}

function limitsFromPlan(window: VolumeWindow, { plannedMl, largestSlotMl, ceilingMlPerDay }: PlannedWindow): LimitNumbers {
  if (largestSlotMl === null || largestSlotMl <= 0) return { softMl: null, hardMl: null };
  const softMl = plannedMl + Math.max(largestSlotMl, 0.1 * plannedMl);
  const hardMl = plannedMl + Math.max(2 * largestSlotMl, 0.25 * plannedMl);
  const atCeilingMl = ceilingMlPerDay === null ? null : hardAtCeilingMl(window, ceilingMlPerDay);
  if (atCeilingMl === null) return { softMl, hardMl };
  return { softMl, hardMl: Math.min(hardMl, Math.max(atCeilingMl, softMl + largestSlotMl / 10)) };
}
