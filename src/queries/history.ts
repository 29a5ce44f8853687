import { keepPreviousData, useMutation, useQuery, useQueryClient } from '@tanstack/vue-query';
import { computed, type MaybeRefOrGetter, toValue } from 'vue';
import type { z } from 'zod';
import type { Delimiter, history, HistoryImport } from '../../shared/contracts/history.ts';
import { call, upload } from '../api/call.ts';

type StartBody = z.input<(typeof history)['history.start']['body']>;

const underWay = ({ state }: Pick<HistoryImport, 'state'>): boolean =>
  state === 'waiting' || state === 'running';

/** Imports of a site, newest first; asked for again while one is being read. */
export function useHistoryImports(siteId: MaybeRefOrGetter<number | null>) {
  return useQuery({
    queryKey: ['history-imports', siteId],
    queryFn: () => call('history.list', { params: { siteId: String(toValue(siteId)) } }),
    select: (reply) => reply.rows,
    enabled: computed(() => toValue(siteId) !== null),
    refetchInterval: (query) => (query.state.data?.rows.some(underWay) ? 2000 : false),
  });
}

/** How a person wants the head of the file read; what is left out is proposed. */
export interface ReadingWishes {
  delimiter?: Delimiter;
  headerLine?: number;
}

/** One import with its refusals and how its file reads; asked for again while it is being read. */
export function useHistoryImport(id: MaybeRefOrGetter<number>, wishes: MaybeRefOrGetter<ReadingWishes>) {
  return useQuery({
    queryKey: ['history-import', id, wishes],
    queryFn: () =>
      call('history.get', { params: { historyImportId: String(toValue(id)) }, query: toValue(wishes) }),
    placeholderData: keepPreviousData,
    refetchInterval: (query) => (query.state.data && underWay(query.state.data.import) ? 1000 : false),
  });
}

export function useUploadHistory() {
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
    }) => upload('history.upload', { siteId: String(siteId) }, file, onProgress),
    onSettled: (_reply, _error, { siteId }) =>
      client.invalidateQueries({ queryKey: ['history-imports', siteId] }),
  });
}

/** After a start or a resume everything that is known of the import is old. */
function useTakeImport() {
  const client = useQueryClient();
  return (row: { id: number; siteId: number }) =>
    Promise.all([
      client.invalidateQueries({ queryKey: ['history-import', row.id] }),
      client.invalidateQueries({ queryKey: ['history-imports', row.siteId] }),
    ]);
}

export function useStartImport(id: MaybeRefOrGetter<number>) {
  const take = useTakeImport();
  return useMutation({
    mutationFn: (body: StartBody) =>
      call('history.start', { params: { historyImportId: String(toValue(id)) }, body }),
    onSuccess: take,
  });
}

export function useResumeImport(id: MaybeRefOrGetter<number>) {
  const take = useTakeImport();
  return useMutation({
    mutationFn: () => call('history.resume', { params: { historyImportId: String(toValue(id)) }, body: {} }),
    onSuccess: take,
  });
}
