import './assets/fonts.css';
import './assets/tokens.css';
import './assets/base.css';
import './assets/layout.css';
import './assets/print.css';
import { QueryClient, VueQueryPlugin } from '@tanstack/vue-query';
import { createPinia } from 'pinia';
import { createApp } from 'vue';
import App from './App.vue';
import { ApiProblem } from './api/client.ts';
import { router } from './router/index.ts';

/** Only what may pass by itself is asked again: no answer at all, or a fault of the server. */
const mayPass = (problem: Error) =>
  problem instanceof ApiProblem && (problem.status === 0 || problem.status >= 500);

const queryClient = new QueryClient({
  defaultOptions: {
    queries: {
      staleTime: 10_000,
      retry: (failures, problem) => failures < 2 && mayPass(problem),
      retryDelay: 800,
    },
  },
});

createApp(App).use(createPinia()).use(VueQueryPlugin, { queryClient }).use(router).mount('#app');
