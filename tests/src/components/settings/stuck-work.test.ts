// @vitest-environment happy-dom
import { VueQueryPlugin } from '@tanstack/vue-query';
import { enableAutoUnmount, flushPromises, mount } from '@vue/test-utils';
import { createPinia, setActivePinia } from 'pinia';
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { createMemoryHistory, createRouter } from 'vue-router';
import StuckWorkSheet from '../../../../src/views/settings/StuckWorkSheet.vue';
import { useSessionStore } from '../../../../src/stores/session.ts';
import type { Role } from '../../../../shared/schemas/sessions.ts';
import type { StuckWorkView } from '../../../../shared/schemas/stuck-work.ts';

enableAutoUnmount(afterEach);
afterEach(() => vi.unstubAllGlobals());
beforeEach(() => setActivePinia(createPinia()));

const nothing: StuckWorkView = { runs: [], mails: [], waiting: { runs: 1, mails: 2 } };
const stuck: StuckWorkView = {
  runs: [
    {
      publicId: 'run-1',
      reference: 'ML-1042',
      applicationId: 'app-1',
      attempts: 5,
      error: 'Could not be completed',
      errorDetail: 'Attempt 5: the disk is full',
      since: '2026-03-02T15:00:00.000Z',
    },
  ],
  mails: [
    {
      key: 'withdrawn:1',
      recipient: 'ada@saltwick.example',
      kind: 'withdrawn',
      reference: 'ML-1042',
      applicationId: 'app-1',
      attempts: 12,
      error: 'Connection refused',
      since: '2026-03-02T15:00:00.000Z',
    },
  ],
  waiting: { runs: 0, mails: 0 },
};

/** The server stands in as one answer; gives what was asked of it. */
async function mountSheet(role: Role, answer: StuckWorkView) {
  const asked: string[] = [];
  vi.stubGlobal('fetch', async (path: string, { method = 'GET' }: RequestInit = {}) => {
    asked.push(`${method} ${path}`);
    return new Response(JSON.stringify(method === 'GET' ? answer : nothing), {
      headers: { 'content-type': 'application/json' },
    });
  });
  useSessionStore().session = {
    user: { publicId: 'u', name: 'Ada', email: 'a@b.example', role, organisation: null },
    csrfToken: 'token',
    demo: false,
    utility: { name: 'Desk', territory: '', timeZone: 'UTC', contactEmail: '' },
  };
  const router = createRouter({
    history: createMemoryHistory(),
    routes: [
      { path: '/', component: { template: '<p />' } },
      { path: '/desk/:id', name: 'folder', component: { template: '<p />' } },
    ],
  });
  const sheet = mount(StuckWorkSheet, { global: { plugins: [router, VueQueryPlugin] } });
  await flushPromises();
  return { sheet, asked };
}

describe('stopped work, on the settings page', () => {
  it('says that nothing has stopped, and what waits', async () => {
    const { sheet } = await mountSheet('administrator', nothing);
    expect(sheet.text()).toContain('Nothing has stopped');
    expect(sheet.text()).toContain('1 screening and 2 mails wait or are under way.');
  });

  it('shows an administrator why, so that the words “An administrator sees why” are true', async () => {
    const { sheet } = await mountSheet('administrator', stuck);
    expect(sheet.text()).toContain('Attempt 5: the disk is full');
    expect(sheet.text()).toContain('Connection refused');
    expect(sheet.text()).toContain('Application withdrawn');
    expect(sheet.get('a').attributes('href')).toBe('/desk/app-1');
  });

  it('tries again what the administrator says, and shows what is left', async () => {
    const { sheet, asked } = await mountSheet('administrator', stuck);
    expect(sheet.findAll('button').map((button) => button.text())).toEqual([
      'Try again with the screening of ML-1042',
      'Try again with the mail to ada@saltwick.example',
    ]);
    await sheet.findAll('button')[0]!.trigger('click');
    await flushPromises();
    expect(asked).toContain('POST /api/runs/run-1/retry');
    expect(sheet.text()).toContain('Nothing has stopped');
  });

  it('lets an auditor read but not try again', async () => {
    const { sheet } = await mountSheet('auditor', stuck);
    expect(sheet.text()).toContain('the disk is full');
    expect(sheet.findAll('button')).toEqual([]);
  });
});
