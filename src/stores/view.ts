import { defineStore } from 'pinia';
import { ref, watch } from 'vue';
import { z } from 'zod';

export type Theme = 'light' | 'dark' | 'auto';

const STORAGE_KEY = 'cupel.view';
const savedView = z.object({
  theme: z.enum(['light', 'dark', 'auto']).catch('auto'),
  site: z.string().nullable().catch(null),
  folded: z.record(z.string(), z.boolean()).catch({}),
});

function readSaved(): z.infer<typeof savedView> {
  try {
    return savedView.parse(JSON.parse(localStorage.getItem(STORAGE_KEY) ?? '{}'));
  } catch {
    // Storage closed by the browser, or written by something else: start with the defaults.
    return { theme: 'auto', site: null, folded: {} };
  }
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
