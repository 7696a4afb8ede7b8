// @vitest-environment happy-dom
import { VueQueryPlugin } from '@tanstack/vue-query';
import { mount } from '@vue/test-utils';
import { createPinia, setActivePinia } from 'pinia';
import { expect, it } from 'vitest';
import { createMemoryHistory, createRouter } from 'vue-router';
import ShellHeader from '../../../../src/components/shell/ShellHeader.vue';
import { useSessionStore } from '../../../../src/stores/session.ts';

it('the ribbon that says “Demo” is a landmark with a name, so that no text of the page stands outside one', () => {
  const pinia = createPinia();
  setActivePinia(pinia);
  useSessionStore().session = {
    user: null,
    csrfToken: 'token',
    demo: true,
    utility: { name: 'Marrowbank', territory: 'Vale', timeZone: 'UTC', contactEmail: 'a@b.example' },
  };
  const router = createRouter({
    history: createMemoryHistory(),
    routes: [{ path: '/', component: { template: '<p />' } }],
  });
  const header = mount(ShellHeader, { global: { plugins: [pinia, router, VueQueryPlugin] } });
  expect(header.get('aside').attributes('aria-label')).toBe('About this demo');
  expect(header.get('aside').text()).toContain('No message leaves this machine.');
});
