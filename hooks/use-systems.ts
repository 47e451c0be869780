import { useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import type { System } from '#shared/contract/systems.ts';
import { call } from '../lib/api.ts';
import type { CallOptions } from '../lib/request.ts';
import { keys } from './keys.ts';

/** Status is computed from time too (what is planned by now), so it is asked again even when nothing happens. */
const statusEveryMs = 60_000;

/** The systems of all one's sites, worst first. */
export function useSystems() {
  return useQuery({
    queryKey: keys.systems(),
    queryFn: ({ signal }) => call('listSystems', { signal }),
    select: (page) => page.items,
    refetchInterval: statusEveryMs,
  });
}

/** One system with its status. */
export function useSystem(systemId: string) {
  const client = useQueryClient();
  return useQuery<System>({
    queryKey: keys.systemDetail(systemId),
    queryFn: ({ signal }) => call('getSystem', { params: { systemId }, signal }),
    refetchInterval: statusEveryMs,
    // From the list that is already here, until its own answer comes.
    placeholderData: () => client.getQueryData<{ items: System[] }>(keys.systems())?.items.find((system) => system.id === systemId),
  });
}

export function useCreateSystem(siteId: string) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (body: CallOptions<'createSystem'>['body']) => call('createSystem', { params: { siteId }, body }),
    onSuccess: () => client.invalidateQueries({ queryKey: keys.systems() }),
  });
}

export function useUpdateSystem(systemId: string) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (body: CallOptions<'updateSystem'>['body']) => call('updateSystem', { params: { systemId }, body }),
    onSuccess: (system) => {
      client.setQueryData(keys.systemDetail(systemId), system);
      return client.invalidateQueries({ queryKey: keys.systems() });
    },
  });
}
