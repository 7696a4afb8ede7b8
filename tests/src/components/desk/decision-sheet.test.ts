// @vitest-environment happy-dom
import { VueQueryPlugin } from '@tanstack/vue-query';
import { mount } from '@vue/test-utils';
import { createPinia } from 'pinia';
import { expect, it } from 'vitest';
import DecisionSheet from '../../../../src/components/desk/DecisionSheet.vue';
import type { Review } from '../../../../src/composables/useReview.ts';
import { useSessionStore } from '../../../../src/stores/session.ts';
import type { ApplicationView } from '../../../../shared/schemas/applications.ts';
import type { RunView } from '../../../../shared/schemas/runs.ts';
import type { SessionView } from '../../../../shared/schemas/sessions.ts';
import { makeFindings } from '../../../support/fixture-applications.ts';

/** The sheet as a reviewer sees it, with an official run that found what is given. */
function mountSheet(findings: RunView['findings'], terms: RunView['terms'] = {}) {
  const pinia = createPinia();
  const run = {
    publicId: 'run',
    kind: 'official',
    state: 'finished',
    findings,
    waivers: [],
    terms,
    notAskedYet: [],
  };
  const stage = 'initial-review';
  const application = { publicId: 'one', stage, allowed: ['approve', 'deny'], decision: null, run };
  useSessionStore(pinia).session = { user: { publicId: 'mira', role: 'reviewer' } } as SessionView;
  return mount(DecisionSheet, {
    props: { application: application as unknown as ApplicationView, review: {} as Review },
    global: { plugins: [pinia, VueQueryPlugin] },
  });
}

it('two open findings of one question are told apart by their element', () => {
  const [unrated] = makeFindings().filter(({ id }) => id === 'interrupting-duty');
  const open = ['PL2-R1', 'PL2-R2'].map((element) => ({
    ...unrated!,
    element,
    verdict: 'needs-data' as const,
    value: null,
    note: 'Its interrupting rating is not known.',
  }));
  const lines = mountSheet(open)
    .findAll('li')
    .map((line) => line.text().replace(/\s+/g, ' '));
  expect(lines).toEqual(
    ['PL2-R1', 'PL2-R2'].map(
      (element) =>
        `Does everything that interrupts faults keep its margin? At ${element}: Needs data: Its interrupting rating is not known.`,
    ),
  );
});

it('an open supplemental question is shown in the initial review, and said not to stand against an approval', () => {
  const open = makeFindings().map((finding) =>
    finding.id === 'minimum-load' || finding.id === 'contribution'
      ? { ...finding, verdict: 'outside' as const, value: 900 }
      : finding,
  );
  const setAside = { roles: ['reviewer' as const], secondPerson: false };
  const sheet = mountSheet(open, {
    'minimum-load': { stage: 'supplemental-review', setAside },
    contribution: { stage: 'initial-review', setAside },
  });
  expect(sheet.text()).toContain('1 finding stands open.');
  const later = sheet.get('[data-later]').text();
  expect(later).toContain('1 open finding belongs to the supplemental review');
  expect(later).toContain('minimum load');
  expect(later).not.toContain('fault current');
});
