import { keepPreviousData, useMutation, useQuery, useQueryClient } from '@tanstack/vue-query';
import { type MaybeRefOrGetter, toValue } from 'vue';
import type { z } from 'zod';
import type { judging } from '../../shared/contracts/judging.ts';
import { call } from '../api/call.ts';

/** From, inclusive, to: ISO instants. */
export interface Period {
  from: string;
  to: string;
}
type StartBody = z.input<(typeof judging)['replays.start']['body']>;

/** How wrong the estimate was over a period; `factor` is that of the exponential update shown beside it. */
export function usePerformance(
  id: MaybeRefOrGetter<number>,
  period: MaybeRefOrGetter<Period>,
  factor: MaybeRefOrGetter<number | null> = null,
) {
  return useQuery({
    queryKey: ['performance', id, period, factor],
    queryFn: () => {
      const updateFactor = toValue(factor);
      return call('performance.get', {
        params: { softSensorId: String(toValue(id)) },
        query: { ...toValue(period), ...(updateFactor === null ? {} : { updateFactor }) },
      });
    },
    placeholderData: keepPreviousData,
  });
}

export function useEstimateSeries(id: MaybeRefOrGetter<number>, period: MaybeRefOrGetter<Period>) {
  return useQuery({
    queryKey: ['series', id, period],
    queryFn: () =>
      call('estimate.series', { params: { softSensorId: String(toValue(id)) }, query: toValue(period) }),
    placeholderData: keepPreviousData,
  });
}

export function useReplays(id: MaybeRefOrGetter<number>) {
  return useQuery({
    queryKey: ['replays', id],
    queryFn: () => call('replays.list', { params: { softSensorId: String(toValue(id)) } }),
    select: (reply) => reply.rows,
  });
}

export function useReplay(id: MaybeRefOrGetter<number>) {
  return useQuery({
    queryKey: ['replay', id],
    queryFn: () => call('replays.get', { params: { replayId: String(toValue(id)) } }),
  });
}

export function useStartReplay(id: MaybeRefOrGetter<number>) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (body: StartBody) =>
      call('replays.start', { params: { softSensorId: String(toValue(id)) }, body }),
    onSuccess: () => client.invalidateQueries({ queryKey: ['replays', toValue(id)] }),
  });
}

export function useCancelRun() {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (runId: number) => call('runs.cancel', { params: { runId: String(runId) }, body: {} }),
    onSuccess: (run) => client.setQueryData(['run', run.id], run),
  });
}
