import { useQuery } from '@tanstack/vue-query';
import { computed, type MaybeRefOrGetter, toValue } from 'vue';
import { call } from '../api/call.ts';

export function useTags(siteId: MaybeRefOrGetter<number | null>) {
  return useQuery({
    queryKey: ['tags', siteId],
    queryFn: () => call('tags.list', { params: { siteId: String(toValue(siteId)) } }),
    select: (reply) => reply.rows,
    enabled: computed(() => toValue(siteId) !== null),
  });
}
