import { createRouter, createWebHistory } from 'vue-router';
import { useSessionStore } from '../stores/session.ts';
import { routes } from './routes.ts';

export const router = createRouter({
  history: createWebHistory(),
  routes,
  scrollBehavior: (to, _from, saved) => saved ?? (to.hash ? { el: to.hash } : { top: 0 }),
});

router.beforeEach(async (to) => {
  if (to.meta.open) return true;
  const self = await useSessionStore()
    .load()
    .catch(() => null);
  return self ? true : { name: 'sign-in', query: to.fullPath === '/' ? {} : { next: to.fullPath } };
});

router.afterEach((to) => {
  document.title = to.meta.title ? `${to.meta.title} · Cupel` : 'Cupel';
});

declare module 'vue-router' {
  interface RouteMeta {
    title?: string;
    /** May be seen without signing in. */
    open?: boolean;
  }
}
