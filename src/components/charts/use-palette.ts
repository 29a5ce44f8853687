import { useQuasar } from 'quasar';
import { nextTick, onBeforeUnmount, onMounted, shallowRef, watch } from 'vue';
import { readPalette, type Palette } from './chart-palette.ts';

/** The canvas colours of the theme in force; light while the page is printed or a picture is taken away. */
export function usePalette() {
  const $q = useQuasar();
  const palette = shallowRef<Palette>(readPalette());
  const forScreen = () => (palette.value = readPalette());
  const forPaper = () => (palette.value = readPalette(true));

  watch(
    () => $q.dark.isActive,
    () => nextTick(forScreen),
  );
  onMounted(() => {
    window.addEventListener('beforeprint', forPaper);
    window.addEventListener('afterprint', forScreen);
  });
  onBeforeUnmount(() => {
    window.removeEventListener('beforeprint', forPaper);
    window.removeEventListener('afterprint', forScreen);
  });
  return { palette, forScreen, forPaper };
}
