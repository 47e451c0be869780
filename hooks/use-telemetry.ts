import { keepPreviousData, useQuery } from '@tanstack/react-query';
import { call } from '../lib/api.ts';
import { keys, type TimeRange } from './keys.ts';

const queryOf = (range: TimeRange) => ({ from: String(range.fromMs), to: String(range.toMs) });

/** The measured series of a system; the live stream keeps their newest values. */
export function useSeries(systemId: string) {
  return useQuery({
    queryKey: keys.series(systemId),
    queryFn: ({ signal }) => call('listSeries', { params: { systemId }, signal }),
    select: (page) => page.items,
  });
}

/** A series over a range as columns, for `useQuery` and `useQueries`. */
export function pointsQuery(systemId: string, seriesId: string, range: TimeRange, count: number) {
  return {
    queryKey: keys.points(systemId, seriesId, range, count),
    queryFn: ({ signal }: { signal: AbortSignal }) =>
      call('getPoints', { params: { seriesId }, query: { ...queryOf(range), points: count }, signal }),
    placeholderData: keepPreviousData,
  };
}

/** The site's day as planned and as delivered. Slots come due by time alone, so it is asked again each minute. */
export function useTape(systemId: string) {
  return useQuery({
    queryKey: keys.tape(systemId),
    queryFn: ({ signal }) => call('getTape', { params: { systemId }, signal }),
    refetchInterval: 60_000,
  });
}

/** Carbon given over a range, in buckets. */
export function useDoses(systemId: string, range: TimeRange, count: number) {
  return useQuery({
    queryKey: keys.doses(systemId, range, count),
    queryFn: ({ signal }) => call('getDoses', { params: { systemId }, query: { ...queryOf(range), points: count }, signal }),
    placeholderData: keepPreviousData,
  });
}

/** Deliveries as the pumps reported them, newest first. */
export function useRuns(systemId: string) {
  return useQuery({
    queryKey: keys.runs(systemId),
    queryFn: ({ signal }) => call('listRuns', { params: { systemId }, query: { limit: 100 }, signal }),
    select: (page) => page.items,
  });
}
