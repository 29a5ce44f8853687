import { onBeforeUnmount, ref, watch } from 'vue';
import type { Board } from '../../../shared/contracts/board.ts';
import { noteLook } from '../../queries/board.ts';

/** How long the board must have been on screen to count as looked at. */
const LOOKED_MS = 5000;

/** When this person looked last, held still while the page is open; notes the present look once it has lasted. */
export function useLastLook(board: () => Board | undefined) {
  const lookedAt = ref<string | null>(null);
  let timer: ReturnType<typeof setTimeout> | undefined;
  const stop = watch(
    board,
    (found) => {
      if (!found || timer !== undefined) return;
      lookedAt.value = found.lookedAt;
      // Whether it is noted or not changes nothing on this page.
      timer = setTimeout(() => void noteLook().catch(() => undefined), LOOKED_MS);
    },
    { immediate: true },
  );
  onBeforeUnmount(() => {
    stop();
    clearTimeout(timer);
  });
  return lookedAt;
}
