import { useMutation, useQuery, useQueryClient } from '@tanstack/vue-query';
import { computed, type MaybeRefOrGetter, toValue } from 'vue';
import type { z } from 'zod';
import type { Tag, tags } from '../../shared/contracts/tags.ts';
import { call } from '../api/call.ts';

export function useTags(siteId: MaybeRefOrGetter<number | null>) {
  return useQuery({
    queryKey: ['tags', siteId],
    queryFn: () => call('tags.list', { params: { siteId: String(toValue(siteId)) } }),
    select: (reply) => reply.rows,
    enabled: computed(() => toValue(siteId) !== null),
  });
}

type NewTag = z.input<(typeof tags)['tags.add']['body']>['tags'][number];
type TagChange = z.input<(typeof tags)['tags.change']['body']>;
type Removal = z.input<(typeof tags)['tags.removeReadings']['body']>;

export function useAddTags(siteId: number) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: (rows: NewTag[]) =>
      call('tags.add', { params: { siteId: String(siteId) }, body: { tags: rows } }),
    onSettled: () => client.invalidateQueries({ queryKey: ['tags', siteId] }),
  });
}

export function useChangeTag(siteId: number) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: ({ id, body }: { id: number; body: TagChange }): Promise<Tag> =>
      call('tags.change', { params: { tagId: String(id) }, body }),
    onSettled: () => client.invalidateQueries({ queryKey: ['tags', siteId] }),
  });
}

/** Readings of a tag between two instants: how many where they are few, else null for "more than can be counted here". */
export async function countReadings(tagId: number, from: string, to: string): Promise<number | null> {
  const reply = await call('tags.series', { params: { tagId: String(tagId) }, query: { from, to } });
  return reply.from === 'readings' ? reply.at.length : null;
}

export function useRemoveReadings(siteId: number) {
  const client = useQueryClient();
  return useMutation({
    mutationFn: ({ tagId, body }: { tagId: number; body: Removal }) =>
      call('tags.removeReadings', { params: { tagId: String(tagId) }, body }),
    onSettled: () => client.invalidateQueries({ queryKey: ['tags', siteId] }),
  });
}
