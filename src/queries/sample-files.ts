import { useMutation, useQuery, useQueryClient } from '@tanstack/vue-query';
import { computed, type MaybeRefOrGetter, toValue } from 'vue';
import type { z } from 'zod';
import type { SampleMends } from '../../shared/contracts/sample-mends.ts';
import type { profileBody } from '../../shared/contracts/sample-profiles.ts';
import { call } from '../api/call.ts';
import { useTakeStale, useTakeView } from './samples.ts';

/** Writes parts of rows of a file anew; the answer shows what would become of each row. */
export function useMendRows(id: MaybeRefOrGetter<number>) {
  return useMutation({
    mutationFn: (body: { mends: SampleMends; version: number }) =>
      call('sampleImports.mend', { params: { sampleImportId: String(toValue(id)) }, body }),
    onSuccess: useTakeView(),
    onError: useTakeStale(),
  });
}

/** Kinds of files that a site knows how to read, those in use. */
export function useProfiles(siteId: MaybeRefOrGetter<number | null>) {
  return useQuery({
    queryKey: ['import-profiles', siteId],
    queryFn: () => call('importProfiles.list', { params: { siteId: String(toValue(siteId)) } }),
    select: ({ rows }) => rows.filter(({ archivedAt }) => archivedAt === null),
    enabled: computed(() => toValue(siteId) !== null),
  });
}

export function useChangeProfile(siteId: number) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: ({ id, body }: { id: number; body: z.input<typeof profileBody> }) =>
      call('importProfiles.change', { params: { importProfileId: String(id) }, body }),
    onSettled: () => client.invalidateQueries({ queryKey: ['import-profiles', siteId] }),
  });
}
