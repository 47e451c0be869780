import { useMutation, useQuery } from '@tanstack/react-query';
import { uuidv7 } from 'uuidv7';
import { call } from '../lib/api.ts';
import type { CallOptions } from '../lib/request.ts';
import { outbox } from './app-outbox.ts';
import { keys } from './keys.ts';

/** The newest 500: years of weekly tests. */
const listLimit = 500;

/** Tests by hand, newest first. */
export function useTests(systemId: string) {
  return useQuery({
    queryKey: keys.tests(systemId),
    queryFn: ({ signal }) => call('listTests', { params: { systemId }, query: { limit: listLimit }, signal }),
    select: (page) => page.items,
  });
}

/**
 * Writes down a test. The answer is `saved` with the test, or `waiting` when there is no network; it is sent once, later.
 * Give `id` to write the same test again (undo of a deletion).
 */
export function useCreateTest(systemId: string) {
  return useMutation({
    mutationFn: (body: CallOptions<'createTest'>['body']) => {
      const id = body.id ?? uuidv7();
      return outbox.submit({ id, systemId, name: 'createTest', options: { params: { systemId }, body: { ...body, id } } });
    },
  });
}

export function useUpdateTest(systemId: string) {
  return useMutation({
    mutationFn: ({ testId, body }: { testId: string; body: CallOptions<'updateTest'>['body'] }) =>
      outbox.submit({ id: uuidv7(), systemId, name: 'updateTest', options: { params: { testId }, body } }),
  });
}

export function useDeleteTest(systemId: string) {
  return useMutation({
    mutationFn: (testId: string) => outbox.submit({ id: uuidv7(), systemId, name: 'deleteTest', options: { params: { testId } } }),
  });
}

/** Carbon given by hand, newest first. */
export function useHandDoses(systemId: string) {
  return useQuery({
    queryKey: keys.handDoses(systemId),
    queryFn: ({ signal }) => call('listHandDoses', { params: { systemId }, query: { limit: listLimit }, signal }),
    select: (page) => page.items,
  });
}

/** Writes down a dose that a person gave already: a record, not an order. */
export function useCreateHandDose(systemId: string) {
  return useMutation({
    mutationFn: (body: CallOptions<'createHandDose'>['body']) => {
      const id = body.id ?? uuidv7();
      return outbox.submit({ id, systemId, name: 'createHandDose', options: { params: { systemId }, body: { ...body, id } } });
    },
  });
}

export function useCreateRefill(systemId: string) {
  return useMutation({
    mutationFn: ({ reservoirId, body }: { reservoirId: string; body: CallOptions<'createRefill'>['body'] }) => {
      const id = body.id ?? uuidv7();
      return outbox.submit({ id, systemId, name: 'createRefill', options: { params: { reservoirId }, body: { ...body, id } } });
    },
  });
}
