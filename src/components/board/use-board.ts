import { useQuasar } from 'quasar';
import { computed } from 'vue';
import { useBoard } from '../../queries/board.ts';
import { useAddressWord, useSiteInAddress } from './use-address.ts';

const FEW = 20;
const MANY = 500;

/** The board as its address asks for it: site, filter, class, and what is unfolded. */
export function useBoardRows() {
  const $q = useQuasar();
  const { chosen } = useSiteInAddress();
  const find = useAddressWord('find');
  const importance = useAddressWord('class');
  const fitWord = useAddressWord('fit');
  const moreWord = useAddressWord('more');

  const narrow = computed(() => $q.screen.lt.sm);
  const filtering = computed(() => find.value !== '' || importance.value !== '');
  const fitShown = computed(() => fitWord.value === '1');
  const more = computed(() => moreWord.value === '1');
  const siteId = computed(() => chosen.value?.id ?? null);

  const board = useBoard(
    computed(() => ({
      siteId: siteId.value,
      health: 'not-fit' as const,
      limit: more.value || filtering.value ? MANY : FEW,
    })),
  );
  const fit = useBoard(
    computed(() => ({ siteId: siteId.value, health: 'fit' as const, limit: MANY })),
    computed(() => fitShown.value || filtering.value),
  );
  const counts = computed(() => board.data.value?.counts);
  /** On a phone what only needs watching waits behind a word too. */
  const notFit = computed(() => {
    const rows = board.data.value?.rows ?? [];
    return narrow.value && !more.value && !filtering.value
      ? rows.filter(({ health }) => health !== 'watch')
      : rows;
  });
  const rows = computed(() => {
    const fitRows = fitShown.value || filtering.value ? (fit.data.value?.rows ?? []) : [];
    const all = [...notFit.value, ...fitRows];
    return importance.value === '' ? all : all.filter((row) => row.importanceClass === importance.value);
  });
  const hidden = computed(() => {
    if (!counts.value || filtering.value) return 0;
    return Math.max(0, counts.value.total - counts.value.fit - notFit.value.length);
  });
  /** More are fit than one answer holds: what is left out is said, never silently missing. */
  const leftOut = computed(() => {
    const got = fit.data.value?.rows.length ?? 0;
    return (fitShown.value || filtering.value) && got > 0 ? (counts.value?.fit ?? 0) - got : 0;
  });
  const loading = computed(() => board.isFetching.value || fit.isFetching.value);
  const showMore = () => (moreWord.value = '1');
  const foldFit = () => (fitWord.value = fitShown.value ? '' : '1');
  return {
    chosen,
    find,
    importance,
    narrow,
    filtering,
    board,
    counts,
    rows,
    hidden,
    leftOut,
    loading,
    fitShown,
    showMore,
    foldFit,
  };
}
