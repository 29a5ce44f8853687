import { computed, watch } from 'vue';
import { useRoute, useRouter } from 'vue-router';
import { useChosenSite } from '../../composables/use-chosen-site.ts';
import { useViewStore } from '../../stores/view.ts';

/** One word of the page's address, as a model; blank takes it out. Other words stay. */
export function useAddressWord(name: string, blank = '') {
  const route = useRoute();
  const router = useRouter();
  return computed({
    get: () => {
      const found = route.query[name];
      return typeof found === 'string' ? found : blank;
    },
    set: (value: string) => {
      const { [name]: _before, ...rest } = route.query;
      void router.replace({ query: value === blank ? rest : { ...rest, [name]: value } });
    },
  });
}

/** A word of the address that is one of a few; anything else written there counts as blank. */
export function useAddressChoice(name: string, choices: readonly string[]) {
  const word = useAddressWord(name);
  return computed({
    get: () => (choices.includes(word.value) ? word.value : ''),
    set: (value: string) => (word.value = value),
  });
}

/** Keeps the site chosen in the bar and the one in the address the same, so that a link shows what its sender saw. */
export function useSiteInAddress() {
  const view = useViewStore();
  const route = useRoute();
  const { sites, chosen } = useChosenSite();
  const word = useAddressWord('site');
  const name = route.name;
  watch(
    () => [word.value, sites.value.length] as const,
    ([id, known]) => {
      if (known === 0) return;
      if (id === '') word.value = chosen.value ? String(chosen.value.id) : '';
      else if (sites.value.some((site) => String(site.id) === id)) view.site = id;
    },
    { immediate: true },
  );
  watch(
    () => view.site,
    (id) => {
      if (route.name === name) word.value = id ?? '';
    },
  );
  return { sites, chosen };
}
