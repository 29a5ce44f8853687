import { createPinia, setActivePinia } from 'pinia';
import { beforeEach, describe, expect, test } from 'vitest';
import { nextTick } from 'vue';
import { useViewStore } from '../../src/stores/view.ts';

beforeEach(() => localStorage.clear());

/** The store as a fresh page load finds it. */
function load() {
  setActivePinia(createPinia());
  return useViewStore();
}

describe('how a person likes to look at Cupel', () => {
  test('starts with the colours of the device, all sites and nothing folded', () => {
    const view = load();
    expect([view.theme, view.site, view.isFolded('duties')]).toEqual(['auto', null, false]);
    expect(view.isFolded('changes', true)).toBe(true);
  });

  test('is remembered on this browser', async () => {
    const view = load();
    view.theme = 'dark';
    view.site = 'tarnby';
    view.setFolded('duties', true);
    await nextTick();
    const again = load();
    expect([again.theme, again.site, again.isFolded('duties')]).toEqual(['dark', 'tarnby', true]);
  });

  test('starts afresh where the memory holds something else', () => {
    for (const stored of ['not json', '{"theme":"neon","site":7,"folded":[1]}', 'null']) {
      localStorage.setItem('cupel.view', stored);
      const view = load();
      expect([view.theme, view.site, view.isFolded('duties')]).toEqual(['auto', null, false]);
    }
  });
});
