import { computed, type MaybeRefOrGetter } from 'vue';
import { usePeopleAtSite } from '../../queries/register.ts';
import { useSessionStore } from '../../stores/session.ts';

/** Engineers of a site as choices of a field, oneself marked: only they own soft sensors and attend to duties. */
export function useEngineers(siteId: MaybeRefOrGetter<number | null>) {
  const session = useSessionStore();
  const { data: people } = usePeopleAtSite(siteId);
  return computed(() =>
    (people.value ?? [])
      .filter(({ roles }) => roles.includes('engineer'))
      .map(({ id, name }) => ({
        value: id,
        label: name,
        note: id === session.self?.id ? 'yourself' : undefined,
      })),
  );
}
