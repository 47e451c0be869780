import { QueryClient } from '@tanstack/react-query';
import { ApiError } from '../lib/api-problem.ts';

/** Whether trying the same question again can help. */
function mayRetry(failures: number, error: Error): boolean {
  if (!(error instanceof ApiError)) return false;
  const { kind } = error.problem;
  return failures < 2 && (kind === 'unreachable' || kind === 'server');
}

/** A cache of the server's state. The live stream keeps it fresh, so that nothing is refetched by mere age. */
export function createQueryClient(): QueryClient {
  return new QueryClient({
    defaultOptions: {
      queries: { staleTime: Infinity, gcTime: 30 * 60_000, retry: mayRetry, refetchOnWindowFocus: false, networkMode: 'always' },
      mutations: { retry: false, networkMode: 'always' },
    },
  });
}

export const queryClient = createQueryClient();
