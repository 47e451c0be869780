import { useMutation, useQuery } from '@tanstack/react-query';
import { call } from '../lib/api.ts';
import type { CallOptions } from '../lib/request.ts';
import { session } from '../lib/session.ts';
import { tellOtherTabs } from '../lib/session-tabs.ts';
import { keys } from './keys.ts';
import { queryClient } from './query-client.ts';

/** Whether the first account is still to be made, and whether this is the demo. */
export function useWelcomeState() {
  return useQuery({ queryKey: keys.welcome(), queryFn: ({ signal }) => call('welcomeState', { signal }), staleTime: 0 });
}

export function useSignIn() {
  return useMutation({
    mutationFn: (body: CallOptions<'signIn'>['body']) => call('signIn', { body }),
    onSuccess: (grant) => {
      queryClient.clear();
      session.accept(grant);
    },
  });
}

export function useWelcome() {
  return useMutation({
    mutationFn: (body: CallOptions<'welcome'>['body']) => call('welcome', { body }),
    onSuccess: (grant) => {
      queryClient.clear();
      session.accept(grant);
    },
  });
}

export function useAcceptInvite() {
  return useMutation({
    mutationFn: (body: CallOptions<'acceptInvite'>['body']) => call('acceptInvite', { body }),
    onSuccess: (grant) => {
      queryClient.clear();
      session.accept(grant);
    },
  });
}

export function useSignOut() {
  return useMutation({
    mutationFn: () => call('signOut'),
    onSuccess: () => {
      session.forget();
      queryClient.clear();
      tellOtherTabs();
    },
  });
}
