import { keepPreviousData, useQuery } from '@tanstack/vue-query';
import { computed, type MaybeRefOrGetter, toValue } from 'vue';
import { call } from '../api/call.ts';

/** One page of sent and waiting mail; asked for again while some of it waits. */
export function useMails(page: MaybeRefOrGetter<{ page: number; perPage: number }>, enabled: () => boolean) {
  return useQuery({
    queryKey: ['mails', computed(() => toValue(page))],
    queryFn: () => call('mail.list', { query: { ...toValue(page) } }),
    enabled,
    placeholderData: keepPreviousData,
    refetchInterval: (query) =>
      query.state.data?.rows.some(({ state }) => state === 'waiting') ? 3000 : 60_000,
  });
}

/** A message as the local mail server took it in; it never changes. */
export function useLocalMail(id: MaybeRefOrGetter<number | null>) {
  return useQuery({
    queryKey: ['local-mail', id],
    queryFn: () => call('mail.read', { params: { localMailId: String(toValue(id)) } }),
    enabled: computed(() => toValue(id) !== null),
    staleTime: Infinity,
  });
}
