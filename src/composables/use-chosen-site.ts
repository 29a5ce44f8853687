import { computed } from 'vue';
import { useSites } from '../queries/sites.ts';
import { useViewStore } from '../stores/view.ts';

/** The site chosen in the bar among those the person may see; null while "All sites" stands. */
export function useChosenSite() {
  const view = useViewStore();
  const { data } = useSites();
  const sites = computed(() => (data.value ?? []).filter((site) => site.archivedAt === null));
  const chosen = computed(() => sites.value.find((site) => String(site.id) === view.site) ?? null);
  /** For pages that work at one site: the chosen one, or the only one. */
  const workingSite = computed(
    () => chosen.value ?? (sites.value.length === 1 ? (sites.value[0] ?? null) : null),
  );
  return { sites, chosen, workingSite };
}
