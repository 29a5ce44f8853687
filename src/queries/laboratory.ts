import { useMutation, useQueries, useQuery, useQueryClient } from '@tanstack/vue-query';
import { computed, type MaybeRefOrGetter, toValue } from 'vue';
import type { z } from 'zod';
import type { laboratory, RetestAnswer, SampleCorrection } from '../../shared/contracts/laboratory.ts';
import { call } from '../api/call.ts';

type NewStandard = z.input<(typeof laboratory)['checkStandards.add']['body']>;
type StandardChange = z.input<(typeof laboratory)['checkStandards.change']['body']>;
type NewSeries = z.input<(typeof laboratory)['checkResults.add']['body']>;

const ofSample = (id: number) => ({ sampleId: String(id) });

/** All versions of a sample and what was decided on them. */
export function useSampleHistory(id: MaybeRefOrGetter<number>) {
  return useQuery({
    queryKey: ['sample-history', id],
    queryFn: () => call('samples.history', { params: ofSample(toValue(id)) }),
  });
}

/** Samples of a site that are held, the longest first. */
export function useHeldSamples(siteId: MaybeRefOrGetter<number>) {
  return useQuery({
    queryKey: ['held-samples', siteId],
    queryFn: () => call('samples.held', { params: { siteId: String(toValue(siteId)) } }),
    select: (reply) => reply.rows,
  });
}

/** Re-tests that are open at a site, the oldest first. */
export function useRetests(siteId: MaybeRefOrGetter<number>) {
  return useQuery({
    queryKey: ['retests', siteId],
    queryFn: () => call('retests.list', { params: { siteId: String(toValue(siteId)) } }),
    select: (reply) => reply.rows.filter(({ answer }) => answer === null),
  });
}

/** Names that files bring and the site does not know. */
export function useUnknownPoints(siteId: MaybeRefOrGetter<number>) {
  return useQuery({
    queryKey: ['unknown-points', siteId],
    queryFn: () => call('samplePoints.unknown', { params: { siteId: String(toValue(siteId)) } }),
    select: (reply) => reply.rows,
  });
}

const precisionOf = (id: number) => ({
  queryKey: ['method-precision', id],
  queryFn: () => call('methods.precision', { params: { methodId: String(id) } }),
});

/** How precise the laboratory is with one method. */
export function useMethodPrecision(methodId: MaybeRefOrGetter<number>) {
  return useQuery(computed(() => precisionOf(toValue(methodId))));
}

/** The same of several methods, in their order; undefined while one loads. */
export function useMethodPrecisions(methodIds: MaybeRefOrGetter<readonly number[]>) {
  return useQueries({ queries: computed(() => toValue(methodIds).map(precisionOf)) });
}

/** Check standards of a method with their results. */
export function useCheckStandards(methodId: MaybeRefOrGetter<number>) {
  return useQuery({
    queryKey: ['check-standards', methodId],
    queryFn: () => call('checkStandards.list', { params: { methodId: String(toValue(methodId)) } }),
    select: (reply) => reply.rows,
  });
}

/** A sample that changed changes lists, sheets and the board, so everything is asked for anew. */
function useAskAnew() {
  const client = useQueryClient();
  return () => void client.invalidateQueries();
}

export function useCorrectSample() {
  return useMutation({
    mutationFn: ({ id, body }: { id: number; body: SampleCorrection }) =>
      call('samples.correct', { params: ofSample(id), body }),
    onSuccess: useAskAnew(),
  });
}

export function useWithdrawSample() {
  return useMutation({
    mutationFn: ({ id, ...body }: { id: number; reason: string; version: number }) =>
      call('samples.withdraw', { params: ofSample(id), body }),
    onSuccess: useAskAnew(),
  });
}

export function useReleaseSample() {
  return useMutation({
    mutationFn: ({ id, ...body }: { id: number; reason: string; version: number }) =>
      call('samples.release', { params: ofSample(id), body }),
    onSuccess: useAskAnew(),
  });
}

export function useAskRetest() {
  return useMutation({
    mutationFn: ({ id, reason }: { id: number; reason: string }) =>
      call('retests.ask', { params: ofSample(id), body: { reason } }),
    onSuccess: useAskAnew(),
  });
}

export function useAnswerRetest() {
  return useMutation({
    mutationFn: ({ id, body }: { id: number; body: RetestAnswer }) =>
      call('retests.answer', { params: ofSample(id), body }),
    onSuccess: useAskAnew(),
  });
}

/** What was found on check standards changes them and the precision of their method. */
function useAskMethodAnew(methodId: MaybeRefOrGetter<number>) {
  const client = useQueryClient();
  return () =>
    Promise.all(
      ['check-standards', 'method-precision'].map((key) =>
        client.invalidateQueries({ queryKey: [key, toValue(methodId)] }),
      ),
    );
}

/** Adds a check standard to a method, or changes the one with this id. */
export function useSaveStandard(methodId: number) {
  return useMutation({
    mutationFn: (order: { id: null; body: NewStandard } | { id: number; body: StandardChange }) =>
      order.id === null
        ? call('checkStandards.add', { params: { methodId: String(methodId) }, body: order.body })
        : call('checkStandards.change', { params: { checkStandardId: String(order.id) }, body: order.body }),
    onSettled: useAskMethodAnew(methodId),
  });
}

export function useAddSeries(methodId: number) {
  return useMutation({
    mutationFn: ({ standardId, body }: { standardId: number; body: NewSeries }) =>
      call('checkResults.add', { params: { checkStandardId: String(standardId) }, body }),
    onSuccess: useAskMethodAnew(methodId),
  });
}

export function useWithdrawSeries(methodId: number) {
  return useMutation({
    mutationFn: ({ id, reason }: { id: number; reason: string }) =>
      call('checkResults.withdraw', { params: { checkResultId: String(id) }, body: { reason } }),
    onSettled: useAskMethodAnew(methodId),
  });
}
