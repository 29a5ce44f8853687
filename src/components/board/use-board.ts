import { useQuasar } from 'quasar';
import { computed } from 'vue';
import { useBoard } from '../../queries/board.ts';
import { narrowRows, uses } from './board-filter.ts';
import type { BoardView } from './BoardViews.vue';
import { useAddressChoice, useAddressWord, useSiteInAddress } from './use-address.ts';
import { useLastLook } from './use-last-look.ts';

const FEW = 20;
const MANY = 500;

/** The board as its address asks for it: site, whose, filter, class, use, and what is unfolded. */
export function useBoardRows() {
  const $q = useQuasar();
  const { chosen } = useSiteInAddress();
  const find = useAddressWord('find');
  const importance = useAddressChoice('class', ['A', 'B', 'C']);
  const use = useAddressChoice('use', uses);
  const viewWord = useAddressWord('view');
  const fitWord = useAddressWord('fit');
  const moreWord = useAddressWord('more');
  const stoppedWord = useAddressWord('stopped');

  const narrow = computed(() => $q.screen.lt.sm);
  const view = computed({
    get: (): BoardView => (viewWord.value === 'mine' || viewWord.value === 'new' ? viewWord.value : ''),
    set: (next) => (viewWord.value = next),
  });
  const filtering = computed(() => find.value !== '' || importance.value !== '' || use.value !== '');
  const fitShown = computed(() => fitWord.value === '1');
  const stoppedShown = computed(() => stoppedWord.value === '1');
  const more = computed(() => moreWord.value === '1');
  const choice = computed(() => ({
    siteId: chosen.value?.id ?? null,
    whose: view.value === 'mine' ? ('mine' as const) : ('all' as const),
    changedSince: null,
  }));

  const board = useBoard(
    computed(() => ({
      ...choice.value,
      health: 'not-fit' as const,
      limit: more.value || filtering.value || view.value === 'mine' ? MANY : FEW,
    })),
  );
  const lookedAt = useLastLook(() => board.data.value);
  const isNew = computed(() => view.value === 'new' && lookedAt.value !== null);
  const changed = useBoard(
    computed(() => ({ ...choice.value, changedSince: lookedAt.value, health: 'all' as const, limit: MANY })),
    isNew,
  );
  const withFit = computed(() => fitShown.value || filtering.value);
  const fit = useBoard(
    computed(() => ({ ...choice.value, health: 'fit' as const, limit: MANY })),
    withFit,
  );
  const stopped = useBoard(
    computed(() => ({ ...choice.value, health: 'stopped' as const, limit: MANY })),
    stoppedShown,
  );
  const counts = computed(() => board.data.value?.counts);
  /** Counts of what is listed: of one's own, or of everything. */
  const listed = computed(() => (view.value === 'mine' ? board.data.value?.mine : undefined) ?? counts.value);
  /** On a phone what only needs watching waits behind a word too. */
  const notFit = computed(() => {
    const rows = board.data.value?.rows ?? [];
    return narrow.value && !more.value && !filtering.value
      ? rows.filter(({ health }) => health !== 'watch')
      : rows;
  });
  const rows = computed(() => {
    const found = isNew.value
      ? (changed.data.value?.rows ?? [])
      : [
          ...notFit.value,
          ...(withFit.value ? (fit.data.value?.rows ?? []) : []),
          ...(stoppedShown.value ? (stopped.data.value?.rows ?? []) : []),
        ];
    return narrowRows(found, { importance: importance.value, use: use.value });
  });
  const hidden = computed(() => {
    if (!listed.value || filtering.value || view.value === 'new') return 0;
    return Math.max(0, listed.value.total - listed.value.fit - notFit.value.length);
  });
  /** More are fit than one answer holds: what is left out is said, never silently missing. */
  const leftOut = computed(() => {
    const got = fit.data.value?.rows.length ?? 0;
    return withFit.value && view.value !== 'new' && got > 0 ? (listed.value?.fit ?? 0) - got : 0;
  });
  const loading = computed(() => [board, fit, changed, stopped].some(({ isFetching }) => isFetching.value));
  const showMore = () => (moreWord.value = '1');
  const foldFit = () => (fitWord.value = fitShown.value ? '' : '1');
  const foldStopped = () => (stoppedWord.value = stoppedShown.value ? '' : '1');
  return {
    chosen,
    view,
    lookedAt,
    isNew,
    choice,
    find,
    importance,
    use,
    narrow,
    filtering,
    board,
    counts,
    listed,
    rows,
    hidden,
    leftOut,
    loading,
    fitShown,
    stoppedShown,
    showMore,
    foldFit,
    foldStopped,
  };
}
