import { keepPreviousData, useMutation, useQuery, useQueryClient } from '@tanstack/vue-query';
import { computed, type MaybeRefOrGetter, toValue } from 'vue';
import type { z } from 'zod';
import type { SampleImportView, SampleMapping } from '../../shared/contracts/sample-import.ts';
import type { LabMethod, SamplePoint, samples } from '../../shared/contracts/samples.ts';
import { call, upload } from '../api/call.ts';
import { ApiProblem } from '../api/problem.ts';

type PointBody = z.input<(typeof samples)['samplePoints.add']['body']>;
type PointChange = z.input<(typeof samples)['samplePoints.change']['body']>;
type MethodBody = z.input<(typeof samples)['methods.add']['body']>;
type MethodChange = z.input<(typeof samples)['methods.change']['body']>;

export interface SamplesAsked {
  samplePointId: string;
  importId: string;
  page: number;
  perPage: number;
}

/** One page of the samples of a site, newest first. */
export function useSamples(siteId: MaybeRefOrGetter<number | null>, asked: MaybeRefOrGetter<SamplesAsked>) {
  return useQuery({
    queryKey: ['samples', siteId, asked],
    queryFn: () => {
      const { samplePointId, importId, ...page } = toValue(asked);
      const query = { ...page, ...(samplePointId && { samplePointId }), ...(importId && { importId }) };
      return call('samples.list', { params: { siteId: String(toValue(siteId)) }, query });
    },
    enabled: computed(() => toValue(siteId) !== null),
    // Rows of another site are not this site's rows of before.
    placeholderData: (before, query) =>
      query?.queryKey[1] === toValue(siteId) ? keepPreviousData(before) : undefined,
  });
}

/** Uploaded files of samples of a site, newest first. */
export function useSampleImports(siteId: MaybeRefOrGetter<number | null>) {
  return useQuery({
    queryKey: ['sample-imports', siteId],
    queryFn: () => call('sampleImports.list', { params: { siteId: String(toValue(siteId)) } }),
    select: (reply) => reply.rows,
    enabled: computed(() => toValue(siteId) !== null),
  });
}

/** One file: how it is read and what becomes of each row. */
export function useSampleImport(id: MaybeRefOrGetter<number>) {
  return useQuery({
    queryKey: ['sample-import', id],
    queryFn: () => call('sampleImports.get', { params: { sampleImportId: String(toValue(id)) } }),
    // Judging takes some seconds after a file was added; the receipt then says what came of it.
    refetchInterval: ({ state }) => (state.data?.receipt?.waiting ? 2000 : false),
  });
}

export function useUploadSamples() {
  const client = useQueryClient();
  return useMutation({
    mutationFn: ({
      siteId,
      file,
      onProgress,
    }: {
      siteId: number;
      file: File;
      onProgress: (share: number) => void;
    }) => upload('sampleImports.upload', { siteId: String(siteId) }, file, onProgress),
    onSettled: (_reply, _error, { siteId }) =>
      client.invalidateQueries({ queryKey: ['sample-imports', siteId] }),
  });
}

/** Takes a view that an answer brought, also the one that came with a 409. */
export function useTakeView() {
  const client = useQueryClient();
  return async (view: SampleImportView) => {
    client.setQueryData(['sample-import', view.import.id], view);
    await client.invalidateQueries({ queryKey: ['sample-imports', view.import.siteId] });
  };
}

/** What stands now, where it moved on since it was shown; null for any other error. */
export function currentView(error: unknown): SampleImportView | null {
  if (!(error instanceof ApiProblem) || error.code !== 'stale') return null;
  const { current } = error.problem;
  return current && 'preview' in current ? (current as unknown as SampleImportView) : null;
}

export function useTakeStale() {
  const take = useTakeView();
  return (error: unknown) => {
    const current = currentView(error);
    return current ? take(current) : undefined;
  };
}

/** Says what each column holds; the answer shows what would become of each row. */
export function useDryRun(id: MaybeRefOrGetter<number>) {
  return useMutation({
    mutationFn: (body: { mapping: SampleMapping; version: number }) =>
      call('sampleImports.dryRun', { params: { sampleImportId: String(toValue(id)) }, body }),
    onSuccess: useTakeView(),
    onError: useTakeStale(),
  });
}

/** Samples that came or went change points, soft sensors and the board, so everything is asked for anew. */
function useTakeChanged() {
  const client = useQueryClient();
  const take = useTakeView();
  return async (view: SampleImportView) => {
    await take(view);
    void client.invalidateQueries({ predicate: ({ queryKey }) => queryKey[0] !== 'sample-import' });
  };
}

export function useCommitImport(id: MaybeRefOrGetter<number>) {
  return useMutation({
    mutationFn: (body: { version: number; outcome: string }) =>
      call('sampleImports.commit', { params: { sampleImportId: String(toValue(id)) }, body }),
    onSuccess: useTakeChanged(),
    onError: useTakeStale(),
  });
}

export function useUndoImport(id: MaybeRefOrGetter<number>) {
  return useMutation({
    mutationFn: () =>
      call('sampleImports.undo', { params: { sampleImportId: String(toValue(id)) }, body: {} }),
    onSuccess: useTakeChanged(),
  });
}

/** Adds a sample point to a site, or changes the one with this id. */
export function useSavePoint(siteId: number) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (
      order: { id: null; body: PointBody } | { id: number; body: PointChange },
    ): Promise<SamplePoint> =>
      order.id === null
        ? call('samplePoints.add', { params: { siteId: String(siteId) }, body: order.body })
        : call('samplePoints.change', { params: { samplePointId: String(order.id) }, body: order.body }),
    onSettled: () =>
      Promise.all([
        client.invalidateQueries({ queryKey: ['sample-points', siteId] }),
        client.invalidateQueries({ queryKey: ['samples', siteId] }),
      ]),
  });
}

/** Adds a laboratory method to a site, or changes the one with this id. */
export function useSaveMethod(siteId: number) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (
      order: { id: null; body: MethodBody } | { id: number; body: MethodChange },
    ): Promise<LabMethod> =>
      order.id === null
        ? call('methods.add', { params: { siteId: String(siteId) }, body: order.body })
        : call('methods.change', { params: { methodId: String(order.id) }, body: order.body }),
    onSettled: () => client.invalidateQueries({ queryKey: ['methods', siteId] }),
  });
}
