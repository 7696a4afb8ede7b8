// @vitest-environment happy-dom
import { createPinia, setActivePinia } from 'pinia';
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import type { RouteLocationNormalized } from 'vue-router';
import type { Role, SessionView } from '../../../shared/schemas/sessions.ts';
import { checkPage, isOwnAddress } from '../../../src/router/guards.ts';

function answerSession(role: Role | null) {
  const view: SessionView = {
    user: role ? { publicId: 'p', name: 'Ana Rell', email: 'ana@b.example', role, organisation: null } : null,
    csrfToken: 'token',
    demo: true,
    utility: { name: 'Marrowbank', territory: 'Vale', timeZone: 'UTC', contactEmail: 'a@b.example' },
  };
  vi.stubGlobal('fetch', () => Promise.resolve(new Response(JSON.stringify(view), { status: 200 })));
}

const page = (given: Partial<RouteLocationNormalized>) =>
  ({ name: 'desk', fullPath: '/desk', query: {}, meta: {}, ...given }) as RouteLocationNormalized;

beforeEach(() => setActivePinia(createPinia()));
afterEach(() => vi.unstubAllGlobals());

describe('the guard of a page', () => {
  it('sends to sign-in and remembers the page when nobody is signed in', async () => {
    answerSession(null);
    expect(await checkPage(page({ fullPath: '/desk/x?sheet=papers' }))).toEqual({
      name: 'sign-in',
      query: { next: '/desk/x?sheet=papers' },
    });
  });

  it('lets everybody see an open page', async () => {
    answerSession(null);
    expect(await checkPage(page({ name: 'not-found', meta: { open: true } }))).toBe(true);
  });

  it('refuses a page of another role', async () => {
    answerSession('applicant');
    expect(await checkPage(page({ meta: { roles: ['reviewer'] } }))).toMatchObject({ name: 'not-allowed' });
  });

  it.each([
    ['applicant', '/projects'],
    ['reviewer', '/desk'],
    ['planner', '/desk'],
    ['auditor', '/desk'],
    ['administrator', '/settings'],
  ] as const)('sends the %s who is signed in already from sign-in to %s', async (role, start) => {
    answerSession(role);
    expect(await checkPage(page({ name: 'sign-in', meta: { open: true } }))).toBe(start);
  });

  it.each([
    ['/desk/abc', true],
    ['//elsewhere.example', false],
    ['/\\elsewhere.example', false],
    ['https://elsewhere.example', false],
    [undefined, false],
    [['/desk'], false],
  ])('takes the address %j for one of our own: %s', (address, own) => {
    expect(isOwnAddress(address)).toBe(own);
  });
});
