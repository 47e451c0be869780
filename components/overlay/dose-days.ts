import { DateTime } from 'luxon';
import type { HandDose } from '#shared/contract/records.ts';
import type { DoseColumns, Run } from '#shared/contract/telemetry.ts';
import type { DoseColumn } from '../charts/dose-bars.ts';

/** Carbon by the site's days; a bucket counts for the day in which its middle lies. */
export function dosesByDay(doses: DoseColumns, zone: string): DoseColumn[] {
  const days = new Map<number, DoseColumn>();
  doses.t.forEach((tMs, i) => {
    const day = DateTime.fromMillis(tMs + doses.resolutionMs / 2, { zone }).startOf('day');
    const fromMs = day.toMillis();
    const known = days.get(fromMs) ?? { fromMs, toMs: day.plus({ days: 1 }).toMillis(), pumpMl: 0, handMl: 0 };
    days.set(fromMs, { ...known, pumpMl: known.pumpMl + (doses.pumpMl[i] ?? 0), handMl: known.handMl + (doses.handMl[i] ?? 0) });
  });
  return [...days.values()].sort((a, b) => a.fromMs - b.fromMs);
}

/** A portion without an end yet, or of no length, still has a place on the axis. */
const leastPortionMs = 1000;

/** Carbon by single portions. */
export function dosesByPortion(runs: readonly Run[], handDoses: readonly HandDose[]): DoseColumn[] {
  const byPump = runs
    .filter((run) => run.kind === 'carbon' && run.ml > 0)
    .map((run) => {
      const fromMs = Date.parse(run.beganAt);
      const endedMs = run.endedAt === null ? fromMs : Date.parse(run.endedAt);
      return { fromMs, toMs: Math.max(endedMs, fromMs + leastPortionMs), pumpMl: run.ml, handMl: 0 };
    });
  const byHand = handDoses.map((dose) => {
    const fromMs = Date.parse(dose.at);
    return { fromMs, toMs: fromMs + leastPortionMs, pumpMl: 0, handMl: dose.ml };
  });
  return [...byPump, ...byHand].sort((a, b) => a.fromMs - b.fromMs);
}
