import { computed, shallowRef, watch } from 'vue';
import { useRoute, useRouter } from 'vue-router';
import { dutyKinds, type Duty, type DutyKind } from '../../../shared/contracts/duties.ts';
import { useDuties } from '../../queries/duties.ts';
import { useSessionStore } from '../../stores/session.ts';
import { useViewStore } from '../../stores/view.ts';
import { useAddressWord, useSiteInAddress } from '../board/use-address.ts';
import { groupOf } from './duty-words.ts';

/** What can be asked for a duty beside its list. */
export const deeds = ['review', 'waive', 'reassign', 'name'] as const;
export type Deed = (typeof deeds)[number];

/** The duties of the choice in the address, and the one that something is asked for. */
export function useDutyRows() {
  const session = useSessionStore();
  const { query: opened } = useRoute();
  // A link in a mail names a duty wherever it is, whatever site was looked at last.
  if (opened.duty !== undefined && opened.site === undefined) useViewStore().site = null;
  const { chosen, sites } = useSiteInAddress();
  const attends = session.mayAnywhere('duty.attend');
  const whose = useAddressWord('whose', attends ? 'mine' : 'sites');
  const state = useAddressWord('state', 'open');
  const kind = useAddressWord('kind');
  const find = useAddressWord('find');
  const choice = computed(() => ({
    whose: whose.value === 'sites' ? ('sites' as const) : ('mine' as const),
    state: state.value === 'closed' ? ('closed' as const) : ('open' as const),
    kind: (dutyKinds as readonly string[]).includes(kind.value) ? (kind.value as DutyKind) : null,
    siteId: chosen.value?.id ?? null,
  }));
  const query = useDuties(choice);
  const first = computed(() => query.data.value?.pages[0] ?? null);
  const rows = computed((): Duty[] => query.data.value?.pages.flatMap((page) => page.rows) ?? []);
  const next = computed(() => {
    const row = rows.value[0];
    return row && choice.value.state === 'open' && groupOf(row) === 'Later' ? row : null;
  });
  return { attends, chosen, sites, whose, state, kind, find, choice, query, first, rows, next };
}

/** The element in which what can be done with a duty stands. */
export const actionsId = (dutyId: number): string => `duty-${dutyId}`;

/** Which duty something is asked for, and what; kept in the address. */
export function useAskedDuty(rows: () => readonly Duty[]) {
  const route = useRoute();
  const router = useRouter();
  const asked = shallowRef<{ duty: Duty; deed: Deed } | null>(null);
  watch(
    [rows, () => route.query.duty, () => route.query.do],
    ([listed, id, name]) => {
      const deed = deeds.find((known) => known === name);
      const duty = listed.find((row) => String(row.id) === id);
      if (!deed || id === undefined) asked.value = null;
      else if (duty && allows(duty, deed)) asked.value = { duty, deed };
      // A duty that has just been attended to is no longer listed; its dialog closes by itself.
      else if (String(asked.value?.duty.id) !== id) asked.value = null;
    },
    { immediate: true },
  );
  /** The address names a duty that this person has nothing to do with, or no longer. */
  const gone = computed(() => route.query.duty !== undefined && asked.value === null);
  function ask(duty: Duty, deed: Deed) {
    void router.replace({ query: { ...route.query, duty: String(duty.id), do: deed } });
  }
  async function leave() {
    const { duty: id, do: _deed, ...rest } = route.query;
    await router.replace({ query: rest });
    // What was asked for from a menu leaves the keyboard nowhere, because the menu is gone.
    document.querySelector<HTMLElement>(`#${actionsId(Number(id))} :is(a, button)`)?.focus();
  }
  return { asked, gone, ask, leave };
}

function allows(duty: Duty, deed: Deed): boolean {
  if (deed === 'waive') return duty.mayWaive;
  if (deed === 'reassign') return duty.mayReassign;
  return duty.mayAttend && duty.kind === (deed === 'review' ? 'review' : 'ownership-gap');
}
