import { useQuery } from '@tanstack/vue-query';
import { computed, type MaybeRefOrGetter, toValue } from 'vue';
import { call } from '../api/call.ts';

export function useSites() {
  return useQuery({ queryKey: ['sites'], queryFn: () => call('sites.list', {}), select: (reply) => reply.rows });
}

/** Areas and units of a site; idle while there is no site. */
export function useUnits(siteId: MaybeRefOrGetter<number | null>) {
  return useQuery({
    queryKey: ['units', siteId],
    queryFn: () => call('units.list', { params: { siteId: String(toValue(siteId)) } }),
    select: (reply) => reply.rows,
    enabled: computed(() => toValue(siteId) !== null),
  });
}

export function useAreas(siteId: MaybeRefOrGetter<number | null>) {
  return useQuery({
    queryKey: ['areas', siteId],
    queryFn: () => call('areas.list', { params: { siteId: String(toValue(siteId)) } }),
    select: (reply) => reply.rows,
    enabled: computed(() => toValue(siteId) !== null),
  });
}
