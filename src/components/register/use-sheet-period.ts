import { computed, ref } from 'vue';
import { useRoute, useRouter } from 'vue-router';
import { instantsOf, periodFromQuery, type DayPeriod, type PresetName } from './period.ts';

/** The time a sheet looks at, kept in its address: `?days=30`, or `?from=2026-11-01&to=2026-11-30`. */
export function useSheetPeriod(zone: () => string) {
  const route = useRoute();
  const router = useRouter();
  // Held still, so that the period does not move with each second.
  const opened = ref(Date.now());
  const read = computed(() => periodFromQuery(route.query, opened.value, zone()));
  const days = computed(() => read.value.days);
  const preset = computed(() => read.value.preset);
  const period = computed(() => instantsOf(days.value, zone()));

  function go(words: Record<string, string>) {
    const { days: _days, from: _from, to: _to, ...rest } = route.query;
    void router.replace({ query: { ...rest, ...words } });
  }
  const choosePreset = (name: PresetName) => {
    opened.value = Date.now();
    go({ days: name });
  };
  const chooseDays = (chosen: DayPeriod) => go({ ...chosen });
  return { days, preset, period, choosePreset, chooseDays };
}
