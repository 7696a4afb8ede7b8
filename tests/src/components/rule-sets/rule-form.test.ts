// @vitest-environment happy-dom
import { VueQueryPlugin } from '@tanstack/vue-query';
import { enableAutoUnmount, flushPromises, mount } from '@vue/test-utils';
import { createPinia, setActivePinia } from 'pinia';
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { createMemoryHistory, createRouter } from 'vue-router';
import type { AreaKey } from '../../../../shared/rule-areas.ts';
import { areaKeys, listAreaQuestions } from '../../../../shared/rule-areas.ts';
import { proFormaRuleSet } from '../../../../shared/rules/pro-forma.ts';
import { questions } from '../../../../shared/schemas/findings.ts';
import type { RuleSetView } from '../../../../shared/schemas/rule-set-views.ts';
import { writeFees, writeFastTrack } from '../../../../src/components/rule-sets/rule-edits.ts';
import RuleSetFormView from '../../../../src/views/rule-sets/RuleSetFormView.vue';

enableAutoUnmount(afterEach);
afterEach(() => vi.unstubAllGlobals());
beforeEach(() => setActivePinia(createPinia()));

const draft = {
  code: 'pro-forma',
  number: 2,
  name: 'Federal pro forma',
  state: 'draft',
  version: 3,
  content: proFormaRuleSet,
  available: {},
  confirmations: [],
  unconfirmed: [],
} as unknown as RuleSetView;

/** The form on one of its pages; gives what was sent. */
async function mountForm(area: AreaKey, answer: { status: number; body: object }) {
  const sent: { path: string; body: Record<string, never> }[] = [];
  vi.stubGlobal('fetch', async (path: string, { method = 'GET', body }: RequestInit = {}) => {
    if (method === 'GET') return Response.json(draft);
    sent.push({ path, body: JSON.parse(String(body)) as Record<string, never> });
    return Response.json(answer.body, { status: answer.status });
  });
  const router = createRouter({
    history: createMemoryHistory(),
    routes: [{ path: '/:code/:number', name: 'rule-set', component: { template: '<p />' } }],
  });
  await router.push('/pro-forma/2');
  const form = mount(RuleSetFormView, {
    props: { code: 'pro-forma', number: 2, area },
    global: { plugins: [router, VueQueryPlugin] },
    attachTo: document.body,
  });
  await flushPromises();
  return { form, sent };
}

describe('the form of a draft of rules', () => {
  it('sends a number as it was typed with its unit, beside every rule of the page, and the version seen', async () => {
    const { form, sent } = await mountForm('screens', { status: 200, body: draft });
    await form.get('#field-rules-interrupting-duty-limits-0-limit').setValue('85 %');
    await form.get('form').trigger('submit');
    await flushPromises();
    expect(sent).toMatchObject([
      {
        path: '/api/rule-sets/pro-forma/2',
        body: {
          version: 3,
          rules: {
            'interrupting-duty': { asked: true, limits: [{ limit: 85, comparison: '<=' }] },
            contribution: { setAside: { roles: ['reviewer'], secondPerson: false } },
          },
        },
      },
    ]);
    expect(sent[0]!.body).not.toHaveProperty('rules.effective-grounding');
  });

  it('keeps what was typed and shows each refusal at its field and in the summary', async () => {
    const path = 'rules.interrupting-duty.limits.0.limit';
    const message = 'Enter the limit as a number of 0 or more';
    const body = {
      title: 'Some answers need attention',
      status: 400,
      code: 'invalid',
      errors: [{ path, message }],
    };
    const { form } = await mountForm('screens', { status: 400, body });
    const field = form.get<HTMLInputElement>('#field-rules-interrupting-duty-limits-0-limit');
    await field.setValue('85,5');
    await form.get('form').trigger('submit');
    await flushPromises();
    expect(field.element.value).toBe('85,5');
    expect(field.attributes('aria-invalid')).toBe('true');
    expect(form.get('[role="alert"]').text()).toContain('1 answer needs attention');
    expect(form.get('a[href="#field-rules-interrupting-duty-limits-0-limit"]').text()).toBe(message);
  });

  it('hides the terms of a question that is not asked', async () => {
    const { form } = await mountForm('screens', { status: 200, body: draft });
    await form.get('#field-rules-contribution-asked').setValue(false);
    expect(form.find('#field-rules-contribution-limits-0-limit').exists()).toBe(false);
    expect(form.find('#field-rules-interrupting-duty-limits-0-limit').exists()).toBe(true);
  });

  it('has every question on exactly one of its pages', () => {
    const ids = areaKeys.flatMap((area) => listAreaQuestions(area).map(({ id }) => id));
    expect(ids.toSorted()).toEqual(questions.map(({ id }) => id).toSorted());
  });
});

describe('what the form writes', () => {
  const fee = { label: 'F', currency: 'USD', source: 'S', readOrMemory: 'read' } as const;

  it('is cents where an amount has them, and what is none stays for the server to name', () => {
    const cents = (base: number | string | undefined) =>
      writeFees([{ ...fee, base, perKw: 0 }])![0]!.baseCents;
    expect(cents(0.29)).toBe(29);
    expect(cents(500)).toBe(50_000);
    expect(cents(1.005)).toBe(100.49999999999999);
    expect(cents('five')).toBe('five');
  });

  it('ends each range of voltage where the next begins', () => {
    const table = structuredClone(proFormaRuleSet.fastTrack);
    table.rows[1]!.fromKv = 6;
    expect(writeFastTrack(table).rows.map(({ belowKv }) => belowKv)).toEqual([6, 15, 30, null]);
  });
});
