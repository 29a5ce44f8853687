import { useMutation, useQuery, useQueryClient } from '@tanstack/vue-query';
import type { z } from 'zod';
import type { people, Person } from '../../shared/contracts/people.ts';
import { call } from '../api/call.ts';

type NewPerson = z.input<(typeof people)['people.add']['body']>;
type ChangedPerson = z.input<(typeof people)['people.change']['body']>;

export function usePeople(enabled: () => boolean) {
  return useQuery({
    queryKey: ['people'],
    queryFn: () => call('people.list', {}),
    select: (reply) => reply.rows,
    enabled,
  });
}

/** Adds a person, or changes the one with this id. */
export function useSavePerson() {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (
      order: { id: null; body: NewPerson } | { id: number; body: ChangedPerson },
    ): Promise<Person> =>
      order.id === null
        ? call('people.add', { body: order.body })
        : call('people.change', { params: { personId: String(order.id) }, body: order.body }),
    onSettled: () =>
      Promise.all([
        client.invalidateQueries({ queryKey: ['people'] }),
        client.invalidateQueries({ queryKey: ['people-at-site'] }),
      ]),
  });
}

export function useMailLink() {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (id: number) => call('people.sendLink', { params: { personId: String(id) }, body: {} }),
    onSuccess: () => client.invalidateQueries({ queryKey: ['mails'] }),
  });
}
