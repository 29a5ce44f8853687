import { mount, type VueWrapper } from '@vue/test-utils';
import { Quasar } from 'quasar';
import type { Component } from 'vue';
import { quasarUi } from '../../quasar.config.ts';

/** Mounts one component as the client does, with Quasar. A generic component has no type that mount() would take. */
export function mountPart(
  component: unknown,
  options: {
    props?: Record<string, unknown>;
    slots?: Record<string, unknown>;
    /** Components that stand for others, such as links without a router. */
    stubs?: Record<string, boolean | Component>;
  } = {},
): VueWrapper {
  return mount(component as Component, {
    props: options.props,
    slots: options.slots as never,
    attachTo: document.body,
    global: {
      plugins: [[Quasar, { ...quasarUi, config: { ...quasarUi.config, dark: false } }]],
      stubs: options.stubs ?? {},
    },
  });
}
