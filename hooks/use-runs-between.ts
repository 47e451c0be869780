import { keepPreviousData, useQuery } from '@tanstack/react-query';
import type { Run } from '#shared/contract/telemetry.ts';
import { call } from '../lib/api.ts';
import { keys, type TimeRange } from './keys.ts';
import { useRuns } from './use-telemetry.ts';

/** The most that one page holds: over a month of two-hourly portions. */
const pageLimit = 500;

/** Deliveries of a range, newest first: those of the past as asked for, the newest as the live stream brings them. */
export function useRunsBetween(systemId: string, range: TimeRange, enabled: boolean): { runs: readonly Run[] | undefined } {
  const newest = useRuns(systemId);
  const past = useQuery({
    queryKey: [...keys.runs(systemId), range.fromMs, range.toMs],
    queryFn: ({ signal }) =>
      call('listRuns', { params: { systemId }, query: { from: String(range.fromMs), to: String(range.toMs), limit: pageLimit }, signal }),
    select: (page) => page.items,
    placeholderData: keepPreviousData,
    enabled,
  });
  if (!enabled || (past.data === undefined && newest.data === undefined)) return { runs: undefined };
  const live = newest.data ?? [];
  const liveKeys = new Set(live.map((run) => `${run.deviceId} ${run.id}`));
  return { runs: [...live, ...(past.data ?? []).filter((run) => !liveKeys.has(`${run.deviceId} ${run.id}`))] };
}
