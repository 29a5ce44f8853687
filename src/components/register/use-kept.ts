import { ref, watch, type Ref } from 'vue';

/**
 * What is being typed, kept in this tab until it is saved: a reload, an expired session or a crash loses nothing.
 * `restored` tells that the form began with what was kept.
 */
export function useKept<T extends object>(
  key: string,
  begin: () => T,
): { kept: Ref<T>; restored: boolean; forget: () => void } {
  const found = read<T>(key);
  const kept = ref(found ?? begin()) as Ref<T>;
  let live = true;
  watch(
    kept,
    (now) => {
      if (!live) return;
      try {
        sessionStorage.setItem(key, JSON.stringify(now));
      } catch {
        // A full or closed storage costs only the copy; the form itself stands.
      }
    },
    { deep: true, flush: 'post' },
  );
  function forget() {
    live = false;
    sessionStorage.removeItem(key);
  }
  return { kept, restored: found !== null, forget };
}

function read<T>(key: string): T | null {
  try {
    const text = sessionStorage.getItem(key);
    return text === null ? null : (JSON.parse(text) as T);
  } catch {
    return null;
  }
}
