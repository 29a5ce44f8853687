import { onScopeDispose, readonly, ref, watch, type Ref } from 'vue';

/**
 * True once `waiting` has lasted `afterMs`: a skeleton shown sooner would only flicker.
 */
export function useLate(waiting: () => boolean, afterMs = 200): Readonly<Ref<boolean>> {
  const late = ref(false);
  let timer: ReturnType<typeof setTimeout> | undefined;
  watch(
    waiting,
    (now) => {
      clearTimeout(timer);
      late.value = false;
      if (now) timer = setTimeout(() => (late.value = true), afterMs);
    },
    { immediate: true },
  );
  onScopeDispose(() => clearTimeout(timer));
  return readonly(late);
}
