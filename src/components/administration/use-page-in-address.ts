import { computed } from 'vue';
import { useRoute, useRouter } from 'vue-router';
import type { TablePaging } from '../base/table-columns.ts';

const usual = 50;
const sizes = [25, 50, 100];

const wholeNumber = (text: unknown, otherwise: number): number =>
  typeof text === 'string' && /^[1-9]\d{0,5}$/.test(text) ? Number(text) : otherwise;

/** The page of a list that the server pages, kept in the address: for DataTable's v-model:paging and for the query. */
export function usePageInAddress() {
  const route = useRoute();
  const router = useRouter();
  const asked = computed(() => {
    const perPage = wholeNumber(route.query.rows, usual);
    return { page: wholeNumber(route.query.page, 1), perPage: sizes.includes(perPage) ? perPage : usual };
  });
  const paging = computed({
    get: (): TablePaging => ({
      sortBy: null,
      descending: false,
      page: asked.value.page,
      rowsPerPage: asked.value.perPage,
    }),
    set: ({ page, rowsPerPage }) => {
      const query: Record<string, unknown> = { ...route.query, page: undefined, rows: undefined };
      if (page > 1) query.page = String(page);
      if (rowsPerPage !== usual && sizes.includes(rowsPerPage)) query.rows = String(rowsPerPage);
      void router.replace({ query: query as Record<string, string> });
    },
  });
  return { asked, paging };
}
