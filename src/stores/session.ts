import { defineStore } from 'pinia';
import { computed, ref } from 'vue';
import type { Action } from '../../shared/contracts/access.ts';
import type { Self } from '../../shared/contracts/people.ts';
import { may } from '../../shared/rules/permissions.ts';
import { call } from '../api/call.ts';

/** Who is signed in, and what they may do; the server asks the same rules again. */
export const useSessionStore = defineStore('session', () => {
  const self = ref<Self | null>(null);
  const known = ref(false);

  async function load(): Promise<Self | null> {
    if (!known.value) {
      self.value = (await call('auth.self', {})).self;
      known.value = true;
    }
    return self.value;
  }

  function take(person: Self | null): void {
    self.value = person;
    known.value = true;
  }

  async function signOut(): Promise<void> {
    await call('auth.signOut', {});
    take(null);
  }

  const roleWords = computed(() => {
    if (!self.value) return '';
    const names = {
      engineer: 'process engineer',
      technician: 'laboratory',
      manager: 'plant manager',
      reader: 'reader',
    };
    const held = [...new Set(self.value.roles.map(({ role }) => names[role]))];
    return [...held, ...(self.value.administrator ? ['administrator'] : [])].join(', ') || 'no role yet';
  });

  /** May the person do this at the site (null: for the company)? */
  const mayDo = (action: Action, siteId: number | null): boolean =>
    self.value !== null && may(self.value, action, siteId);
  /** May the person do this at any site? */
  const mayAnywhere = (action: Action): boolean =>
    mayDo(action, null) || (self.value?.roles ?? []).some(({ siteId }) => mayDo(action, siteId));

  return { self, known, load, take, signOut, roleWords, mayDo, mayAnywhere };
});
