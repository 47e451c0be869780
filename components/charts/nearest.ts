import type { Columns } from './gaps.ts';
import { splitAtGaps } from './gaps.ts';
import type { LaneInput } from './lane-model.ts';
import type { TestPoint } from './test-marks.ts';
import { formatNumber } from '../../lib/format/number.ts';

/** What one lane says at the crosshair. */
export interface Reading {
  readonly laneId: string;
  readonly title: string;
  /** "12 mg/L", "no data", "no test yet". */
  readonly text: string;
  /** When that was, where it is not the time of the crosshair itself. */
  readonly tMs: number | null;
  /** The test that it names, so that it can be opened. */
  readonly testId: string | null;
}

/** The index in an ascending list that is nearest to `wanted`, the earlier of two equally near; -1 in an empty list. */
export function nearestIndex(ascending: readonly number[], wanted: number): number {
  let low = 0;
  let high = ascending.length;
  while (low < high) {
    const middle = (low + high) >>> 1;
    if ((ascending[middle] ?? Infinity) < wanted) low = middle + 1;
    else high = middle;
  }
  const before = ascending[low - 1];
  const after = ascending[low];
  if (before === undefined) return ascending.length === 0 ? -1 : 0;
  if (after === undefined) return low - 1;
  return wanted - before <= after - wanted ? low - 1 : low;
}

/** The entry nearest to `tMs`, or null where it falls into a gap or outside the data by more than the usual spacing. */
export function columnAt(columns: Columns, tMs: number): number | null {
  const { stretches } = splitAtGaps(columns);
  const half = columns.resolutionMs / 2;
  const i = nearestIndex(columns.t, tMs - half);
  const stretch = stretches.find((candidate) => i >= candidate.start && i < candidate.end);
  if (i < 0 || !stretch) return null;
  const first = columns.t[stretch.start] ?? 0;
  const last = columns.t[stretch.end - 1] ?? 0;
  const usualMs = stretch.end - stretch.start > 1 ? (last - first) / (stretch.end - stretch.start - 1) : 60_000;
  const leewayMs = Math.max(usualMs, columns.resolutionMs);
  return tMs >= first - leewayMs && tMs <= last + columns.resolutionMs + leewayMs ? i : null;
}

function nearestTest(points: readonly TestPoint[], tMs: number): TestPoint | null {
  const sorted = [...points].sort((a, b) => a.tMs - b.tMs);
  return (
    sorted[
      nearestIndex(
        sorted.map((point) => point.tMs),
        tMs,
      )
    ] ?? null
  );
}

function traceText(columns: Columns, i: number, lane: LaneInput): string {
  const mean = `${formatNumber(columns.mean[i] ?? 0, lane.decimals)} ${lane.unit}`.trim();
  if (columns.resolutionMs === 0) return mean;
  const low = formatNumber(columns.min[i] ?? 0, lane.decimals);
  const high = formatNumber(columns.max[i] ?? 0, lane.decimals);
  return low === high ? mean : `${mean} (${low} to ${high})`;
}

function doseText(lane: LaneInput, tMs: number, nearMs: number): { text: string; tMs: number | null } | null {
  const doses = lane.doses;
  if (!doses) return null;
  const inside = doses.columns.find((column) => tMs >= column.fromMs && tMs < column.toMs);
  const i = nearestIndex(
    doses.columns.map((column) => column.fromMs),
    tMs,
  );
  const nearest = doses.columns[i];
  const column = inside ?? (nearest && Math.abs(nearest.fromMs - tMs) <= nearMs ? nearest : undefined);
  const planned = doses.steps.filter((step) => step.fromMs <= tMs).at(-1);
  const plannedText = planned ? `planned ${formatNumber(planned.mlPerDay, lane.decimals)} a day` : null;
  const given = column
    ? [
        column.pumpMl > 0 || column.handMl === 0 ? `${formatNumber(column.pumpMl, lane.decimals)} mL` : null,
        column.handMl > 0 ? `${formatNumber(column.handMl, lane.decimals)} mL by hand` : null,
      ]
        .filter((part) => part !== null)
        .join(', ')
    : doses.per === 'portion'
      ? 'no portion here'
      : 'nothing given';
  return {
    text: plannedText ? `${given}, ${plannedText}` : given,
    tMs: column && doses.per === 'portion' ? column.fromMs : null,
  };
}

/** What each lane says at one time; `nearMs` is how far a portion may be from the crosshair and still be meant. */
export function readLanes(lanes: readonly LaneInput[], tMs: number, nearMs: number): Reading[] {
  return lanes.flatMap((lane): Reading[] => {
    const base = { laneId: lane.id, title: lane.title, tMs: null, testId: null };
    const readings: Reading[] = lane.traces.map((trace) => {
      const i = columnAt(trace.columns, tMs);
      const text = i === null ? 'no data' : traceText(trace.columns, i, lane);
      return { ...base, title: lane.traces.length > 1 ? trace.label : lane.title, text };
    });
    if (lane.tests) {
      const test = nearestTest(lane.tests.points, tMs);
      readings.push(
        test
          ? {
              ...base,
              text: `${test.below ? 'under ' : ''}${formatNumber(test.value, lane.decimals)} ${lane.unit}`,
              tMs: test.tMs,
              testId: test.id,
            }
          : { ...base, text: 'no test yet' },
      );
    }
    const dose = doseText(lane, tMs, nearMs);
    if (dose) readings.push({ ...base, ...dose });
    return readings;
  });
}
