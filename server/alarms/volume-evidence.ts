import type { LimitNumbers } from '#shared/domain/volume-limits.ts';
import type { CarbonEntry, CarbonRecord, CarbonWindow } from './carbon-record.ts';

/** More doses than this are counted, not listed. */
const MOST_DOSES = 200;

const iso = (ms: number) => new Date(ms).toISOString();
/** Takes off the dust of binary sums. */
export const roundMl = (ml: number) => Math.round(ml * 1e6) / 1e6;
const rounded = (ml: number | null) => (ml === null ? null : roundMl(ml));

/** What a volume alarm rests on: the window, what was planned in it, and every dose that counts in it. */
export function volumeEvidence(
  carbon: CarbonRecord,
  end: { endMs: number; counted: CarbonWindow; limits: LimitNumbers },
  windowMs: number,
): Record<string, unknown> {
  const { endMs, counted, limits } = end;
  const beginMs = endMs - windowMs;
  const doses = dosesOf(carbon.entries.filter((entry) => entry.atMs > beginMs && entry.atMs <= endMs));
  const versions = new Map(carbon.plannedSlots(beginMs, endMs).map((slot) => [`${slot.deviceId}/${slot.version}`, slot]));
  return {
    windowFrom: iso(beginMs),
    windowTo: iso(endMs),
    givenMl: roundMl(counted.givenMl),
    plannedMl: roundMl(counted.plannedMl),
    largestSlotMl: rounded(counted.largestSlotMl),
    ceilingMlPerDay: rounded(counted.ceilingMlPerDay),
    softMl: rounded(limits.softMl),
    hardMl: rounded(limits.hardMl),
    givenOnStoppedHeadsMl: roundMl(counted.stoppedMl),
    scheduleVersions: [...versions.values()].map(({ deviceId, version }) => ({ deviceId, version })),
    doses: doses.slice(-MOST_DOSES),
    dosesNotListed: Math.max(0, doses.length - MOST_DOSES),
  };
}

/** The ledger's steps put together by what gave them, ascending in time. */
function dosesOf(entries: CarbonEntry[]): Record<string, unknown>[] {
  const bySource = new Map<string, CarbonEntry[]>();
  for (const entry of entries) {
    const key = `${entry.sourceKind}:${entry.sourceId}`;
    bySource.set(key, [...(bySource.get(key) ?? []), entry]);
  }
  return [...bySource.values()]
    .flatMap((steps) => (steps[0] === undefined ? [] : [{ first: steps[0], ml: steps.reduce((sum, step) => sum + step.ml, 0) }]))
    .sort((a, b) => a.first.atMs - b.first.atMs)
    .map(({ first, ml }) => ({
      at: iso(first.atMs),
      ml: roundMl(ml),
      source: first.sourceKind,
      sourceId: first.sourceId,
      cause: first.run?.cause ?? null,
      deviceId: first.run?.deviceId ?? null,
      head: first.run?.head ?? null,
      dueAt: first.run?.dueMs == null ? null : iso(first.run.dueMs),
      onStoppedHead: first.onStoppedHead,
    }));
}
