import { useMutation, useQuery, useQueryClient } from '@tanstack/vue-query';
import { computed, type MaybeRefOrGetter, toValue } from 'vue';
import type { z } from 'zod';
import type { EnteredSample, NotTaken, sampling } from '../../shared/contracts/sampling.ts';
import { call } from '../api/call.ts';

export type ShiftAsked = 'previous' | 'current' | 'next';
type NewRequest = z.input<(typeof sampling)['sampling.ask']['body']>;

/** What is asked for in a shift of a site. The list stays when the network goes, for whoever stands at the point. */
export function useAsked(siteId: MaybeRefOrGetter<number | null>, shift: MaybeRefOrGetter<ShiftAsked>) {
  return useQuery({
    queryKey: ['asked', siteId, shift],
    queryFn: () =>
      call('sampling.asked', {
        params: { siteId: String(toValue(siteId)) },
        query: { shift: toValue(shift) },
      }),
    enabled: computed(() => toValue(siteId) !== null),
    refetchInterval: 60_000,
  });
}

/** What was entered on this device. */
export type Entry = { kind: 'value'; body: EnteredSample } | { kind: 'not-taken'; body: NotTaken };

/** Sends one entry and has everything asked for anew that it may change. */
export function useDeliver() {
  const client = useQueryClient();
  return async (siteId: number, entry: Entry): Promise<{ held: string | null }> => {
    const params = { siteId: String(siteId) };
    let held: string | null = null;
    if (entry.kind === 'value') ({ held } = await call('sampling.enter', { params, body: entry.body }));
    else await call('sampling.notTaken', { params, body: entry.body });
    for (const key of ['asked', 'samples', 'held-samples']) {
      void client.invalidateQueries({ queryKey: [key] });
    }
    return { held };
  };
}

/** Samples that people asked for at a site and that are still open. */
export function useRequests(siteId: MaybeRefOrGetter<number>) {
  return useQuery({
    queryKey: ['sample-requests', siteId],
    queryFn: () => call('sampling.requests', { params: { siteId: String(toValue(siteId)) } }),
    select: ({ rows }) => rows,
  });
}

export function useAskForSamples(softSensorId: number) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (body: NewRequest) =>
      call('sampling.ask', { params: { softSensorId: String(softSensorId) }, body }),
    onSuccess: () =>
      Promise.all([
        client.invalidateQueries({ queryKey: ['sample-requests'] }),
        client.invalidateQueries({ queryKey: ['asked'] }),
      ]),
  });
}

export function useWithdrawRequest() {
  const client = useQueryClient();
  return useMutation({
    mutationFn: ({ id, version }: { id: number; version: number }) =>
      call('sampling.withdraw', { params: { sampleRequestId: String(id) }, body: { version } }),
    onSettled: () =>
      Promise.all([
        client.invalidateQueries({ queryKey: ['sample-requests'] }),
        client.invalidateQueries({ queryKey: ['asked'] }),
      ]),
  });
}
