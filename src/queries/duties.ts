import {
  keepPreviousData,
  useInfiniteQuery,
  useMutation,
  useQuery,
  useQueryClient,
} from '@tanstack/vue-query';
import { type MaybeRefOrGetter, toValue } from 'vue';
import type { z } from 'zod';
import type { duties, Duty, DutyKind, Review } from '../../shared/contracts/duties.ts';
import { call } from '../api/call.ts';

type Waiver = z.input<(typeof duties)['duties.waive']['body']>;
type Assignment = z.input<(typeof duties)['duties.reassign']['body']>;
type NewReview = z.input<(typeof duties)['reviews.add']['body']>;

export interface DutyChoice {
  whose: 'mine' | 'sites';
  state: 'open' | 'closed';
  kind: DutyKind | null;
  siteId: number | null;
}

const perPage = 200;

/** Duties by due date, the closed ones newest first; more are fetched when asked for. */
export function useDuties(choice: MaybeRefOrGetter<DutyChoice>) {
  return useInfiniteQuery({
    queryKey: ['duties', choice],
    queryFn: ({ pageParam }) => {
      const { whose, state, kind, siteId } = toValue(choice);
      const narrowed = { ...(kind && { kind }), ...(siteId !== null && { siteId: String(siteId) }) };
      return call('duties.mine', { query: { whose, state, page: pageParam, perPage, ...narrowed } });
    },
    initialPageParam: 1,
    getNextPageParam: (reply, _pages, page) => (page * perPage < reply.total ? page + 1 : undefined),
    refetchInterval: 60_000,
    placeholderData: keepPreviousData,
  });
}

function useRefreshDuties() {
  const client = useQueryClient();
  const shows = ['duties', 'reviews', 'sheet', 'board', 'audit'];
  return () => Promise.all(shows.map((area) => client.invalidateQueries({ queryKey: [area] })));
}

export function useWaiveDuty() {
  return useMutation({
    mutationFn: ({ id, body }: { id: number; body: Waiver }): Promise<Duty> =>
      call('duties.waive', { params: { dutyId: String(id) }, body }),
    onSettled: useRefreshDuties(),
  });
}

export function useReassignDuty() {
  return useMutation({
    mutationFn: ({ id, body }: { id: number; body: Assignment }): Promise<Duty> =>
      call('duties.reassign', { params: { dutyId: String(id) }, body }),
    onSettled: useRefreshDuties(),
  });
}

export function useAddReview() {
  return useMutation({
    mutationFn: ({ softSensorId, body }: { softSensorId: number; body: NewReview }): Promise<Review> =>
      call('reviews.add', { params: { softSensorId: String(softSensorId) }, body }),
    onSuccess: useRefreshDuties(),
  });
}

/** Reviews of a soft sensor, newest first. */
export function useReviews(softSensorId: MaybeRefOrGetter<number>) {
  return useQuery({
    queryKey: ['reviews', softSensorId],
    queryFn: () => call('reviews.list', { params: { softSensorId: String(toValue(softSensorId)) } }),
    select: (reply) => reply.rows,
  });
}
