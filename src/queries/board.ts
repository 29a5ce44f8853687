import { keepPreviousData, useQuery } from '@tanstack/vue-query';
import { type MaybeRefOrGetter, toValue } from 'vue';
import { call } from '../api/call.ts';

/** What of the board is asked for. */
export interface BoardChoice {
  siteId: number | null;
  health: 'all' | 'not-fit' | 'fit';
  limit: number;
}

/** The board of all sites or of one; what stood before stays on screen while another choice is fetched. */
export function useBoard(choice: MaybeRefOrGetter<BoardChoice>, enabled: MaybeRefOrGetter<boolean> = true) {
  return useQuery({
    queryKey: ['board', choice],
    queryFn: () => {
      const { siteId, health, limit } = toValue(choice);
      return call('board.get', {
        query: { ...(siteId === null ? {} : { siteId: String(siteId) }), health, limit },
      });
    },
    enabled,
    refetchInterval: 60_000,
    placeholderData: keepPreviousData,
  });
}
