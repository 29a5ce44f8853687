import { defineStore } from 'pinia';
import { ref, watch } from 'vue';

export type Theme = 'light' | 'dark' | 'auto';

const STORAGE_KEY = 'cupel.view';
interface SavedView {
  theme: Theme;
  site: string | null;
  folded: Record<string, boolean>;
}

function readSaved(): SavedView {
  const saved: SavedView = { theme: 'auto', site: null, folded: {} };
  try {
    const found = JSON.parse(localStorage.getItem(STORAGE_KEY) ?? '{}') as Record<string, unknown>;
    if (found.theme === 'light' || found.theme === 'dark') saved.theme = found.theme;
    if (typeof found.site === 'string') saved.site = found.site;
    const folded = Object.entries(found.folded ?? {}).filter(([, value]) => typeof value === 'boolean');
    saved.folded = Object.fromEntries(folded) as Record<string, boolean>;
  } catch {
    // Storage closed by the browser, or written by something else: start with the defaults.
  }
  return saved;
}

/** How this person likes to look at Cupel in this browser: theme, chosen site (null: all), folded sections. */
export const useViewStore = defineStore('view', () => {
  const saved = readSaved();
  const theme = ref<Theme>(saved.theme);
  const site = ref<string | null>(saved.site);
  const folded = ref<Record<string, boolean>>(saved.folded);

  function isFolded(section: string, otherwise = false): boolean {
    return folded.value[section] ?? otherwise;
  }

  function setFolded(section: string, value: boolean) {
    folded.value = { ...folded.value, [section]: value };
  }

  watch([theme, site, folded], () => {
    const view = { theme: theme.value, site: site.value, folded: folded.value };
    try {
      localStorage.setItem(STORAGE_KEY, JSON.stringify(view));
    } catch {
      // A full or closed storage costs only the memory of these choices.
    }
  });

  return { theme, site, folded, isFolded, setFolded };
});
