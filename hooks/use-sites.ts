import { useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import { call } from '../lib/api.ts';
import type { CallOptions } from '../lib/request.ts';
import { keys } from './keys.ts';

export function useSites() {
  return useQuery({ queryKey: keys.sites(), queryFn: ({ signal }) => call('listSites', { signal }), select: (page) => page.items });
}

export function useCreateSite() {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (body: CallOptions<'createSite'>['body']) => call('createSite', { body }),
    onSuccess: () => Promise.all([client.invalidateQueries({ queryKey: keys.sites() }), client.invalidateQueries({ queryKey: keys.me() })]),
  });
}

export function useMembers(siteId: string) {
  return useQuery({
    queryKey: keys.members(siteId),
    queryFn: ({ signal }) => call('listMembers', { params: { siteId }, signal }),
    select: (page) => page.items,
    staleTime: 0,
  });
}

export function useInvite(siteId: string) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (body: CallOptions<'invite'>['body']) => call('invite', { params: { siteId }, body }),
    onSuccess: () => client.invalidateQueries({ queryKey: keys.mail(siteId) }),
  });
}

export function useSetRole(siteId: string) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: ({ userId, role }: { userId: string } & CallOptions<'setRole'>['body']) =>
      call('setRole', { params: { siteId, userId }, body: { role } }),
    onSettled: () => client.invalidateQueries({ queryKey: keys.members(siteId) }),
  });
}

export function useRemoveMember(siteId: string) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (userId: string) => call('removeMember', { params: { siteId, userId } }),
    onSettled: () => client.invalidateQueries({ queryKey: keys.members(siteId) }),
  });
}

/** Mail that the site sent or, without a mail server, kept. For owners. */
export function useMail(siteId: string, enabled: boolean) {
  return useQuery({
    queryKey: keys.mail(siteId),
    queryFn: ({ signal }) => call('listOutbox', { params: { siteId }, signal }),
    select: (page) => page.items,
    enabled,
    staleTime: 0,
  });
}

export function useAudit(siteId: string, enabled: boolean) {
  return useQuery({
    queryKey: keys.audit(siteId),
    queryFn: ({ signal }) => call('listAudit', { params: { siteId }, query: { limit: 100 }, signal }),
    select: (page) => page.items,
    enabled,
    staleTime: 0,
  });
}

export function useProducts(siteId: string) {
  return useQuery({
    queryKey: keys.products(siteId),
    queryFn: ({ signal }) => call('listProducts', { params: { siteId }, signal }),
    select: (page) => page.items,
    enabled: siteId !== '',
  });
}

export function useCreateProduct(siteId: string) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (body: CallOptions<'createProduct'>['body']) => call('createProduct', { params: { siteId }, body }),
    onSuccess: () => client.invalidateQueries({ queryKey: keys.products(siteId) }),
  });
}
