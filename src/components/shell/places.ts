import type { Role } from '../../../shared/schemas/sessions.ts';

interface Place {
  label: string;
  to: string;
}

const projects: Place = { label: 'My projects', to: '/projects' };
const reports: Place = { label: 'Place reports', to: '/reports' };
const desk: Place = { label: 'The desk', to: '/desk' };
const models: Place = { label: 'Network models', to: '/models' };
const settings: Place = { label: 'Settings', to: '/settings' };
const mailbox: Place = { label: 'Mailbox', to: '/mailbox' };

const placesByRole: Record<Role, readonly Place[]> = {
  applicant: [projects, reports],
  reviewer: [desk, models, reports],
  planner: [desk, models, reports],
  administrator: [settings, desk, models, reports],
  auditor: [desk, models, reports, settings],
};

/** Where a person of this role can go; the local mailbox exists in the demo only. */
export function listPlaces(role: Role, demo: boolean): readonly Place[] {
  return demo ? [...placesByRole[role], mailbox] : placesByRole[role];
}
