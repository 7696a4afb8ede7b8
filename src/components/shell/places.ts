import type { Role } from '../../../shared/schemas/sessions.ts';

interface Place {
  label: string;
  to: string;
}

const projects: Place = { label: 'My projects', to: '/projects' };
const desk: Place = { label: 'The desk', to: '/desk' };
const models: Place = { label: 'Network models', to: '/models' };
const settings: Place = { label: 'Settings', to: '/settings' };
const mailbox: Place = { label: 'Mailbox', to: '/mailbox' };

const placesByRole: Record<Role, readonly Place[]> = {
  applicant: [projects],
  reviewer: [desk, models],
  planner: [desk, models],
  administrator: [settings, desk, models],
  auditor: [desk, models, settings],
};

/** Where a person of this role can go; the local mailbox exists in the demo only. */
export function listPlaces(role: Role, demo: boolean): readonly Place[] {
  return demo ? [...placesByRole[role], mailbox] : placesByRole[role];
}
