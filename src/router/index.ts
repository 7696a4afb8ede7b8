import {
  createRouter,
  createWebHistory,
  type RouteLocationNormalized,
  type RouteRecordRaw,
} from 'vue-router';
import type { Role } from '../../shared/schemas/sessions.ts';
import { areaKeys } from '../../shared/rule-areas.ts';
import { turnOutcome } from '../composables/useOutcome.ts';
import { movePageFocus } from '../composables/usePageFocus.ts';
import { checkPage } from './guards.ts';

const applies: readonly Role[] = ['applicant'];
const staff: readonly Role[] = ['reviewer', 'planner', 'administrator', 'auditor'];
const readsSettings: readonly Role[] = ['administrator', 'auditor'];
const writesRules: readonly Role[] = ['administrator'];

const readRuleSetPath = ({ params }: RouteLocationNormalized) => ({
  ...params,
  number: Number(params.number),
});

const routes: RouteRecordRaw[] = [
  { path: '/', redirect: { name: 'sign-in' } },
  {
    path: '/sign-in',
    name: 'sign-in',
    meta: { open: true },
    component: () => import('../views/sessions/SignInView.vue'),
  },

  // My projects (applicants)
  {
    path: '/projects',
    name: 'projects',
    meta: { roles: applies },
    component: () => import('../views/applications/ProjectsView.vue'),
  },
  {
    path: '/projects/:id',
    name: 'project',
    props: true,
    meta: { roles: applies },
    component: () => import('../views/applications/ProjectView.vue'),
  },
  {
    path: '/projects/:id/form',
    name: 'draft',
    props: true,
    meta: { roles: applies },
    component: () => import('../views/applications/DraftView.vue'),
  },
  {
    path: '/projects/:id/form/check',
    name: 'check',
    props: true,
    meta: { roles: applies },
    component: () => import('../views/applications/CheckView.vue'),
  },
  {
    path: '/projects/:id/form/:section(project|site|equipment|connection|papers)',
    name: 'section',
    props: true,
    meta: { roles: applies },
    component: () => import('../views/applications/SectionView.vue'),
  },
  {
    path: '/projects/:id/submitted',
    name: 'submitted',
    props: true,
    meta: { roles: applies },
    component: () => import('../views/applications/SubmittedView.vue'),
  },

  // The desk (staff)
  {
    path: '/desk',
    name: 'desk',
    meta: { roles: staff },
    component: () => import('../views/desk/WorklistView.vue'),
  },
  {
    path: '/desk/:id',
    name: 'folder',
    props: true,
    meta: { roles: staff },
    component: () => import('../views/desk/FolderView.vue'),
  },
  {
    path: '/desk/:id/sheet',
    name: 'sheet',
    props: true,
    meta: { roles: staff },
    component: () => import('../views/desk/SheetView.vue'),
  },
  {
    path: '/models',
    name: 'models',
    meta: { roles: staff },
    component: () => import('../views/models/ModelsView.vue'),
  },

  {
    path: '/models/:code/room',
    name: 'room',
    props: true,
    meta: { roles: staff },
    component: () => import('../views/models/RoomView.vue'),
  },

  // For everybody, and settings
  { path: '/reports', name: 'reports', component: () => import('../views/reports/ReportsView.vue') },
  {
    path: '/reports/new',
    name: 'report-request',
    meta: { roles: applies },
    component: () => import('../views/reports/ReportRequestView.vue'),
  },
  {
    path: '/reports/:id',
    name: 'report',
    props: true,
    component: () => import('../views/reports/ReportView.vue'),
  },
  { path: '/mailbox', name: 'mailbox', component: () => import('../views/mailbox/MailboxView.vue') },
  {
    path: '/settings',
    name: 'settings',
    meta: { roles: readsSettings },
    component: () => import('../views/settings/SettingsView.vue'),
  },
  {
    path: '/settings/rule-sets/:code/:number(\\d+)',
    name: 'rule-set',
    props: readRuleSetPath,
    meta: { roles: staff },
    component: () => import('../views/rule-sets/RuleSetView.vue'),
  },
  {
    path: '/settings/rule-sets/:code/:number(\\d+)/publish',
    name: 'rule-set-publish',
    props: readRuleSetPath,
    meta: { roles: writesRules },
    component: () => import('../views/rule-sets/RuleSetPublishView.vue'),
  },
  {
    path: `/settings/rule-sets/:code/:number(\\d+)/:area(${areaKeys.join('|')})`,
    name: 'rule-set-form',
    props: readRuleSetPath,
    meta: { roles: writesRules },
    component: () => import('../views/rule-sets/RuleSetFormView.vue'),
  },
  {
    path: '/not-allowed',
    name: 'not-allowed',
    meta: { open: true },
    component: () => import('../views/problems/NotAllowedView.vue'),
  },
  {
    path: '/:rest(.*)*',
    name: 'not-found',
    meta: { open: true },
    component: () => import('../views/problems/NotFoundView.vue'),
  },
];

export const router = createRouter({
  history: createWebHistory(),
  routes,
  scrollBehavior(to, from, saved) {
    if (saved) return saved;
    if (to.hash) return { el: to.hash };
    return to.path === from.path ? false : { top: 0 };
  },
});

router.beforeEach(checkPage);
router.afterEach((to, from, failure) => {
  if (failure || to.path === from.path) return;
  turnOutcome();
  // The first page of a visit keeps the browser's own focus, at the top of the document.
  if (from.matched.length > 0) void movePageFocus();
});
