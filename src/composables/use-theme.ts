import { useQuasar } from 'quasar';
import { watch } from 'vue';
import { useViewStore } from '../stores/view.ts';

/** Keeps Quasar's dark mode at the person's choice. Call once, in App.vue. */
export function useTheme() {
  const $q = useQuasar();
  const view = useViewStore();
  watch(
    () => view.theme,
    (theme) => $q.dark.set(theme === 'auto' ? 'auto' : theme === 'dark'),
    { immediate: true },
  );
}
