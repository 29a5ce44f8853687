import { keepPreviousData, useQuery } from '@tanstack/vue-query';
import { type MaybeRefOrGetter, toValue } from 'vue';
import { call } from '../api/call.ts';

/** What of the board is asked for. changedSince: only what changed since that instant. */
export interface BoardChoice {
  siteId: number | null;
  health: 'all' | 'not-fit' | 'fit' | 'stopped' | 'confirmable';
  whose: 'all' | 'mine';
  changedSince: string | null;
  limit: number;
}

/** The board of all sites or of one; what stood before stays on screen while another choice is fetched. */
export function useBoard(choice: MaybeRefOrGetter<BoardChoice>, enabled: MaybeRefOrGetter<boolean> = true) {
  return useQuery({
    queryKey: ['board', choice],
    queryFn: () => {
      const { siteId, changedSince, ...rest } = toValue(choice);
      return call('board.get', {
        query: {
          ...rest,
          ...(siteId === null ? {} : { siteId: String(siteId) }),
          ...(changedSince === null ? {} : { changedSince }),
        },
      });
    },
    enabled,
    refetchInterval: 60_000,
    placeholderData: keepPreviousData,
  });
}

/** Says that the board was looked at. */
export const noteLook = () => call('board.looked', { body: {} });
