import { keepPreviousData, useMutation, useQuery, useQueryClient } from '@tanstack/vue-query';
import { computed, type MaybeRefOrGetter, toValue } from 'vue';
import type { z } from 'zod';
import type { DayOrder, EventFile, events } from '../../shared/contracts/events.ts';
import { call, upload } from '../api/call.ts';
import { ApiProblem } from '../api/problem.ts';

type NewEvent = z.input<(typeof events)['events.add']['body']>;
type SiteQuery = z.input<(typeof events)['events.list']['query']>;
type SensorQuery = z.input<(typeof events)['events.ofSensor']['query']>;

/** One page of the events of a site, newest first, and what is stopped there now. */
export function useSiteEvents(siteId: MaybeRefOrGetter<number | null>, asked: MaybeRefOrGetter<SiteQuery>) {
  return useQuery({
    queryKey: ['events', siteId, asked],
    queryFn: () =>
      call('events.list', { params: { siteId: String(toValue(siteId)) }, query: toValue(asked) }),
    enabled: computed(() => toValue(siteId) !== null),
    // Rows of another site are not this site's rows of before.
    placeholderData: (before, query) =>
      query?.queryKey[1] === toValue(siteId) ? keepPreviousData(before) : undefined,
  });
}

/** Events of a soft sensor and of its unit, newest first. */
export function useSensorEvents(id: MaybeRefOrGetter<number>, asked: MaybeRefOrGetter<SensorQuery> = {}) {
  return useQuery({
    queryKey: ['events-of-sensor', id, asked],
    queryFn: () =>
      call('events.ofSensor', { params: { softSensorId: String(toValue(id)) }, query: toValue(asked) }),
    placeholderData: (before, query) =>
      query?.queryKey[1] === toValue(id) ? keepPreviousData(before) : undefined,
  });
}

/** What happened to a unit changes which samples count, so that sheets, board and duties are asked for anew. */
function useAskAnew() {
  const client = useQueryClient();
  return () => void client.invalidateQueries();
}

export function useRecordEvent(siteId: MaybeRefOrGetter<number>) {
  return useMutation({
    mutationFn: (body: NewEvent) => call('events.add', { params: { siteId: String(toValue(siteId)) }, body }),
    onSuccess: useAskAnew(),
  });
}

export function useWithdrawEvent() {
  return useMutation({
    mutationFn: ({ id, reason }: { id: number; reason: string }) =>
      call('events.withdraw', { params: { eventId: String(id) }, body: { reason } }),
    onSuccess: useAskAnew(),
  });
}

export interface EventFileSent {
  file: File;
  dayOrder: DayOrder | null;
  /** What was seen of it; null only shows what would become of each row. */
  outcome: string | null;
}

/** Sends a file of events: to be looked at, or to be added as it was seen. */
export function useSendEvents(siteId: MaybeRefOrGetter<number>) {
  const askAnew = useAskAnew();
  return useMutation({
    mutationFn: ({ file, dayOrder, outcome }: EventFileSent): Promise<EventFile> =>
      upload('events.upload', { siteId: String(toValue(siteId)) }, file, undefined, { dayOrder, outcome }),
    onSuccess: (reply) => {
      if (reply.committed) askAnew();
    },
  });
}

/** What becomes of the rows now, where that changed since it was shown; null for any other error. */
export function currentFile(error: unknown): EventFile | null {
  if (!(error instanceof ApiProblem) || error.code !== 'stale' || !error.problem.current) return null;
  return error.problem.current as unknown as EventFile;
}
