import { useMutation, useQueryClient } from '@tanstack/react-query';
import { call } from '../lib/api.ts';
import { keys } from './keys.ts';

function useControl(name: 'stop' | 'resume', systemId: string) {
  const client = useQueryClient();
  return useMutation({
    // Never through the outbox and never by itself again: an order is given by a person, now.
    mutationFn: (heads: string[] | undefined) => call(name, { params: { systemId }, body: heads === undefined ? {} : { heads } }),
    onSettled: () =>
      Promise.all([client.invalidateQueries({ queryKey: keys.system(systemId) }), client.invalidateQueries({ queryKey: keys.systems() })]),
  });
}

/** Stops the carbon heads, or the heads named; the answer says what each pump did. */
export function useStop(systemId: string) {
  return useControl('stop', systemId);
}

/** Lets stopped heads dose again. */
export function useResume(systemId: string) {
  return useControl('resume', systemId);
}
