import { VueQueryPlugin } from '@tanstack/vue-query';
import { createPinia } from 'pinia';
import { Quasar } from 'quasar';
import { createApp } from 'vue';
import { quasarUi } from '../quasar.config.ts';
import App from './App.vue';
import './css/app.css';
import { createQueryClient } from './queries/query-client.ts';
import { router } from './router/index.ts';
import { useSessionStore } from './stores/session.ts';

const app = createApp(App);
app.use(createPinia());
app.use(Quasar, quasarUi);
const queryClient = createQueryClient(() => {
  useSessionStore().take(null);
  const { fullPath, name } = router.currentRoute.value;
  if (name !== 'sign-in') void router.push({ name: 'sign-in', query: { next: fullPath, ended: '1' } });
});
app.use(VueQueryPlugin, { queryClient });
app.use(router);
app.mount('#app');
