import { useQuery } from '@tanstack/vue-query';
import { computed, type MaybeRefOrGetter, toValue } from 'vue';
import type { Run } from '../../shared/contracts/runs.ts';
import { call } from '../api/call.ts';

export const hasEnded = (run: Pick<Run, 'state'>): boolean =>
  ['done', 'failed', 'cancelled'].includes(run.state);

/** Progress of long work, asked for each second until it has ended. */
export function useRun(runId: MaybeRefOrGetter<number | null>) {
  return useQuery({
    queryKey: ['run', runId],
    queryFn: () => call('runs.get', { params: { runId: String(toValue(runId)) } }),
    enabled: computed(() => toValue(runId) !== null),
    staleTime: 0,
    refetchInterval: (query) => (query.state.data && hasEnded(query.state.data) ? false : 1000),
  });
}
