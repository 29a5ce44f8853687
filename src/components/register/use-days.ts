import { computed, ref } from 'vue';
import { instantsOf, lastDays, periodProblem } from './period.ts';

/** Two days being typed at a site: the fields, what is wrong with them, and the instants they stand for. */
export function useDays(zone: string, days: number, end: string | number | Date) {
  const first = lastDays(days, end, zone);
  const from = ref(first.from);
  const to = ref(first.to);
  const wrong = computed(() => periodProblem(from.value, to.value));
  const instants = computed(() =>
    wrong.value === null ? instantsOf({ from: from.value, to: to.value }, zone) : null,
  );
  return { from, to, wrong, instants };
}
