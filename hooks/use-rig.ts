import { useMutation, useQuery, useQueryClient } from '@tanstack/react-query';
import { call } from '../lib/api.ts';
import type { CallOptions } from '../lib/request.ts';
import { keys } from './keys.ts';

export function useHeads(systemId: string) {
  return useQuery({
    queryKey: keys.heads(systemId),
    queryFn: ({ signal }) => call('listHeads', { params: { systemId }, signal }),
    select: (page) => page.items,
  });
}

export function useReservoirs(systemId: string) {
  return useQuery({
    queryKey: keys.reservoirs(systemId),
    queryFn: ({ signal }) => call('listReservoirs', { params: { systemId }, signal }),
    select: (page) => page.items,
  });
}

export function useDevices(systemId: string) {
  return useQuery({
    queryKey: keys.devices(systemId),
    queryFn: ({ signal }) => call('listDevices', { params: { systemId }, signal }),
    select: (page) => page.items,
  });
}

/** The newest raw messages of a device; asked again while they are looked at. */
export function useMessages(deviceId: string) {
  return useQuery({
    queryKey: keys.messages(deviceId),
    queryFn: ({ signal }) => call('listMessages', { params: { deviceId }, signal }),
    select: (page) => page.items,
    staleTime: 0,
    refetchInterval: 2000,
  });
}

export function useRejects(deviceId: string) {
  return useQuery({
    queryKey: keys.rejects(deviceId),
    queryFn: ({ signal }) => call('listRejects', { params: { deviceId }, signal }),
    select: (page) => page.items,
    staleTime: 0,
    refetchInterval: 5000,
  });
}

function useRigChange<Given, Result>(systemId: string, mutationFn: (given: Given) => Promise<Result>) {
  const client = useQueryClient();
  return useMutation({
    mutationFn,
    onSuccess: () =>
      Promise.all([client.invalidateQueries({ queryKey: keys.system(systemId) }), client.invalidateQueries({ queryKey: keys.systems() })]),
  });
}

/** The answer holds the password, this once. */
export function useCreateDevice(systemId: string) {
  return useRigChange(systemId, (body: CallOptions<'createDevice'>['body']) => call('createDevice', { params: { systemId }, body }));
}

/** The answer holds the new password, this once. */
export function useRenewCredentials(systemId: string) {
  return useRigChange(systemId, (deviceId: string) => call('renewCredentials', { params: { deviceId } }));
}

export function useCreateHead(systemId: string) {
  return useRigChange(systemId, (body: CallOptions<'createHead'>['body']) => call('createHead', { params: { systemId }, body }));
}

export function useUpdateHead(systemId: string) {
  return useRigChange(systemId, ({ headId, body }: { headId: string; body: CallOptions<'updateHead'>['body'] }) =>
    call('updateHead', { params: { headId }, body }),
  );
}

export function useCreateReservoir(systemId: string) {
  return useRigChange(systemId, (body: CallOptions<'createReservoir'>['body']) => call('createReservoir', { params: { systemId }, body }));
}

export function useUpdateSeries(systemId: string) {
  return useRigChange(systemId, ({ seriesId, body }: { seriesId: string; body: CallOptions<'updateSeries'>['body'] }) =>
    call('updateSeries', { params: { seriesId }, body }),
  );
}

/** Sets the schedule by hand. */
export function usePutSchedule(systemId: string) {
  return useRigChange(systemId, (body: CallOptions<'putSchedule'>['body']) => call('putSchedule', { params: { systemId }, body }));
}
