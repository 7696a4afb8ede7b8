import { SignIn } from '../../shared/schemas/sessions.ts';
import { getCsrfToken } from '../middleware/csrf.ts';
import { markBrowser } from '../middleware/known-browser.ts';
import { limitSignIns } from '../middleware/rate-limits.ts';
import { signIn, signOut } from '../middleware/sessions.ts';
import { route } from '../route-definition.ts';
import { getSessionView, listDemoAccounts } from '../services/sessions.ts';

export const sessionRoutes = [
  route({
    method: 'get',
    path: '/session',
    action: 'session.read',
    handle: ({ deps, context, request }) => getSessionView(deps, context, getCsrfToken(request)),
  }),
  route({
    method: 'post',
    path: '/session',
    action: 'session.begin',
    body: SignIn,
    before: ({ config }) => limitSignIns(config),
    async handle({ deps, context, request, response }) {
      const actor = await signIn(deps, request, response);
      markBrowser(deps.config, actor.email, response);
      return getSessionView(deps, { ...context, actor }, getCsrfToken(request));
    },
  }),
  route({
    method: 'delete',
    path: '/session',
    action: 'session.end',
    async handle({ deps, context, request }) {
      await signOut(request);
      return getSessionView(deps, { ...context, actor: null }, getCsrfToken(request));
    },
  }),
  route({
    method: 'get',
    path: '/demo/accounts',
    action: 'demo-accounts.list',
    handle: ({ deps }) => listDemoAccounts(deps),
  }),
];
