import type { RouteLocationNormalized, RouteLocationRaw } from 'vue-router';
import type { Role } from '../../shared/schemas/sessions.ts';
import { useSessionStore } from '../stores/session.ts';

declare module 'vue-router' {
  interface RouteMeta {
    /** Open to everybody, signed in or not. */
    open?: boolean;
    /** Absent: every role. The server has the last word in any case. */
    roles?: readonly Role[];
  }
}

export const startPages: Record<Role, string> = {
  applicant: '/projects',
  reviewer: '/desk',
  planner: '/desk',
  auditor: '/desk',
  administrator: '/settings',
};

/** Only an address of our own is followed after sign-in. */
export function isOwnAddress(address: unknown): address is string {
  return typeof address === 'string' && /^\/(?![/\\])/.test(address);
}

/** Decides whether the page may be opened, and where to go when not. */
export async function checkPage(to: RouteLocationNormalized): Promise<true | RouteLocationRaw> {
  const { user } = await useSessionStore().load();
  if (to.name === 'sign-in' && user)
    return isOwnAddress(to.query.next) ? to.query.next : startPages[user.role];
  if (to.meta.open) return true;
  if (!user) return { name: 'sign-in', query: to.fullPath === '/' ? {} : { next: to.fullPath } };
  if (to.meta.roles && !to.meta.roles.includes(user.role)) return { name: 'not-allowed', replace: true };
  return true;
}
