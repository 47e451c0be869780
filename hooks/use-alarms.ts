import { useMutation, useQuery, useQueryClient, type QueryClient } from '@tanstack/react-query';
import type { Alarm } from '#shared/contract/alarms.ts';
import type { AlarmCode } from '#shared/domain/alarm-codes.ts';
import { call } from '../lib/api.ts';
import type { CallOptions } from '../lib/request.ts';
import { keys } from './keys.ts';
import { putAlarm } from './live-cache.ts';

/** The alarms of a system that are not over and seen. */
export function useAlarms(systemId: string) {
  return useQuery({
    queryKey: keys.alarms(systemId),
    queryFn: ({ signal }) => call('listSystemAlarms', { params: { systemId }, query: { limit: 200 }, signal }),
    select: (page) => page.items,
  });
}

/** Alarms that are over, newest first. */
export function useAlarmLog(systemId: string) {
  return useQuery({
    queryKey: keys.alarmLog(systemId),
    queryFn: ({ signal }) => call('listSystemAlarms', { params: { systemId }, query: { limit: 100, state: 'normal' }, signal }),
    select: (page) => page.items,
    staleTime: 0,
  });
}

/** One alarm with its log. */
export function useAlarm(alarmId: string) {
  return useQuery({ queryKey: keys.alarm(alarmId), queryFn: ({ signal }) => call('getAlarm', { params: { alarmId }, signal }) });
}

async function afterChange(client: QueryClient, alarm: Alarm): Promise<void> {
  putAlarm(client, alarm);
  await Promise.all([
    client.invalidateQueries({ queryKey: keys.alarm(alarm.id) }),
    client.invalidateQueries({ queryKey: keys.systemDetail(alarm.systemId) }),
    client.invalidateQueries({ queryKey: keys.heads(alarm.systemId) }),
  ]);
}

export function useAcknowledge(alarmId: string) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: () => call('acknowledge', { params: { alarmId } }),
    onSuccess: (alarm) => afterChange(client, alarm),
  });
}

export function useTake(alarmId: string) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (body: CallOptions<'take'>['body']) => call('take', { params: { alarmId }, body }),
    onSuccess: (alarm) => afterChange(client, alarm),
  });
}

export function useShelve(alarmId: string) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (body: CallOptions<'shelve'>['body']) => call('shelve', { params: { alarmId }, body }),
    onSuccess: (alarm) => afterChange(client, alarm),
  });
}

export function useReset(alarmId: string) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (body: CallOptions<'reset'>['body']) => call('reset', { params: { alarmId }, body }),
    onSuccess: (alarm) => afterChange(client, alarm),
  });
}

/** The limits of a system, defaults included. */
export function useAlarmRules(systemId: string) {
  return useQuery({
    queryKey: keys.rules(systemId),
    queryFn: ({ signal }) => call('listRules', { params: { systemId }, signal }),
    select: (page) => page.items,
  });
}

export function usePutAlarmRule(systemId: string) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: ({ code, body }: { code: AlarmCode; body: CallOptions<'putRule'>['body'] }) =>
      call('putRule', { params: { systemId, code }, body }),
    onSuccess: () => client.invalidateQueries({ queryKey: keys.rules(systemId) }),
  });
}
