import { useQueries, useQueryClient, type QueryClient } from '@tanstack/react-query';
import type { Points } from '#shared/contract/telemetry.ts';
import { keys, type TimeRange } from './keys.ts';
import { pointsQuery } from './use-telemetry.ts';

/** Buckets do not grow with the live stream, so those that reach into the present are asked for again. */
const bucketsEveryMs = 60_000;

/** What is here already of a series, over whatever range: shown until its own answer comes, so that nothing blinks. */
function newestKnown(client: QueryClient, systemId: string, seriesId: string): Points | undefined {
  const all = client
    .getQueryCache()
    .findAll({ queryKey: [...keys.allPoints(systemId), seriesId] })
    .filter((query) => query.state.data !== undefined)
    .sort((a, b) => b.state.dataUpdatedAt - a.state.dataUpdatedAt);
  return client.getQueryData<Points>(all[0]?.queryKey ?? []);
}

export interface ManyPoints {
  readonly bySeriesId: ReadonlyMap<string, Points>;
  readonly isFetching: boolean;
  readonly error: Error | null;
}

/** Several series over one range as columns. */
export function useManyPoints(systemId: string, seriesIds: readonly string[], range: TimeRange, count: number): ManyPoints {
  const client = useQueryClient();
  return useQueries({
    queries: seriesIds.map((seriesId) => ({
      ...pointsQuery(systemId, seriesId, range, count),
      placeholderData: () => newestKnown(client, systemId, seriesId),
      refetchInterval: (query: { state: { data?: Points } }) =>
        query.state.data !== undefined && query.state.data.resolutionMs > 0 && range.toMs > Date.now() ? bucketsEveryMs : (false as const),
    })),
    combine: (results) => ({
      bySeriesId: new Map(results.flatMap((result, i) => (result.data ? [[seriesIds[i] ?? '', result.data] as const] : []))),
      isFetching: results.some((result) => result.isFetching),
      error: results.find((result) => result.error !== null)?.error ?? null,
    }),
  });
}
