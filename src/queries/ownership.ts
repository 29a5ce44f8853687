import { useMutation, useQuery, useQueryClient } from '@tanstack/vue-query';
import { computed, type MaybeRefOrGetter, toValue } from 'vue';
import type { z } from 'zod';
import type { Handover, ownership } from '../../shared/contracts/ownership.ts';
import { call } from '../api/call.ts';

type Offer = z.input<(typeof ownership)['handovers.propose']['body']>;
type Answer = z.input<(typeof ownership)['handovers.answer']['body']>;

/** Who looked after a soft sensor, what is missing, and the offers that wait. */
export function useOwnership(softSensorId: MaybeRefOrGetter<number>) {
  return useQuery({
    queryKey: ['ownership', softSensorId],
    queryFn: () => call('ownership.history', { params: { softSensorId: String(toValue(softSensorId)) } }),
  });
}

/** Offers that wait for my answer, and those I made or gave away. */
export function useHandoversWaiting() {
  return useQuery({
    queryKey: ['handovers'],
    queryFn: () => call('handovers.waiting', {}),
    refetchInterval: 60_000,
  });
}

/** Ownership stands on sheets, lists and duties alike, so whatever shows it is asked for anew. */
function useRefreshOwnership() {
  const client = useQueryClient();
  const shows = ['ownership', 'handovers', 'duties', 'sheet', 'register', 'board', 'audit'];
  return () => Promise.all(shows.map((area) => client.invalidateQueries({ queryKey: [area] })));
}

export function useOfferHandover() {
  return useMutation({
    mutationFn: ({ softSensorId, body }: { softSensorId: number; body: Offer }): Promise<Handover> =>
      call('handovers.propose', { params: { softSensorId: String(softSensorId) }, body }),
    onSuccess: useRefreshOwnership(),
  });
}

export function useAnswerHandover() {
  return useMutation({
    mutationFn: ({ id, body }: { id: number; body: Answer }): Promise<Handover> =>
      call('handovers.answer', { params: { handoverId: String(id) }, body }),
    // Also when it is refused: it may have been answered or withdrawn meanwhile.
    onSettled: useRefreshOwnership(),
  });
}

export function useWithdrawHandover() {
  return useMutation({
    mutationFn: (id: number): Promise<Handover> =>
      call('handovers.withdraw', { params: { handoverId: String(id) } }),
    onSettled: useRefreshOwnership(),
  });
}

/** What a person answers for; idle until it is asked. */
export function useResponsibilities(
  personId: MaybeRefOrGetter<number | null>,
  enabled: MaybeRefOrGetter<boolean>,
) {
  return useQuery({
    queryKey: ['responsibilities', personId],
    queryFn: () => call('people.responsibilities', { params: { personId: String(toValue(personId)) } }),
    enabled: computed(() => toValue(personId) !== null && toValue(enabled)),
    staleTime: 0,
  });
}
