import { useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import { call } from '../lib/api.ts';
import type { CallOptions } from '../lib/request.ts';
import { keys } from './keys.ts';

/** Who is signed in, with a role in each site. */
export function useMe() {
  return useQuery({ queryKey: keys.me(), queryFn: ({ signal }) => call('me', { signal }) });
}

export function useUpdateMe() {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (body: CallOptions<'updateMe'>['body']) => call('updateMe', { body }),
    onSuccess: (me) => client.setQueryData(keys.me(), me),
  });
}

export function useChangePassword() {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (body: CallOptions<'changePassword'>['body']) => call('changePassword', { body }),
    onSuccess: () => client.invalidateQueries({ queryKey: keys.sessions() }),
  });
}

/** One's open sessions. */
export function useSessions() {
  return useQuery({
    queryKey: keys.sessions(),
    queryFn: ({ signal }) => call('sessions', { signal }),
    select: (page) => page.items,
    staleTime: 0,
  });
}

export function useEndSession() {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (sessionId: string) => call('endSession', { params: { sessionId } }),
    onSuccess: () => client.invalidateQueries({ queryKey: keys.sessions() }),
  });
}
