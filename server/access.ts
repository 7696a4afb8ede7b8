import { roles, type Role } from '../shared/schemas/sessions.ts';

/**
 * How far a role reaches with an action. `own` is the actor's organisation (a message: their own address);
 * `any` is everything that was handed in: a draft stays with the organisation that writes it.
 */
export type Reach = 'none' | 'own' | 'any';

/** What the `:id` in a route's path names; services/ownership.ts finds whose it is. */
export type Subject = 'application' | 'run' | 'file' | 'message' | 'report';

export interface Rule {
  /** Allowed to people who are not signed in, too. */
  anonymous?: true;
  /** Not there at all outside a demo. */
  demoOnly?: true;
  subject?: Subject;
  roles: Readonly<Record<Role, Reach>>;
}

const nobody: Record<Role, Reach> = {
  applicant: 'none',
  reviewer: 'none',
  planner: 'none',
  administrator: 'none',
  auditor: 'none',
};
const staff = { reviewer: 'any', planner: 'any', administrator: 'any', auditor: 'any' } as const;
const everyone = { applicant: 'any', ...staff } as const;
const ownOrStaff = { applicant: 'own', ...staff } as const;
const staffOnly = { ...nobody, ...staff };
const applicants = { ...nobody, applicant: 'own' } as const;
const administrators = { ...nobody, administrator: 'any' } as const;
const reviewers = { ...nobody, reviewer: 'any' } as const;

/** The one place that says who may do what. Every route names one of these actions. */
export const access = {
  'session.read': { anonymous: true, roles: everyone },
  'session.begin': { anonymous: true, roles: everyone },
  'session.end': { anonymous: true, roles: everyone },
  'health.read': { anonymous: true, roles: everyone },
  'demo-accounts.list': { anonymous: true, demoOnly: true, roles: everyone },

  'territory.read': { roles: everyone },
  'territory.snap': { roles: everyone },
  'equipment.list': { roles: everyone },
  'events.listen': { roles: everyone },
  'models.read': { roles: staffOnly },
  'rooms.ask': { roles: { ...nobody, reviewer: 'any', planner: 'any' } },
  'rule-sets.read': { roles: staffOnly },
  'rule-sets.edit': { roles: administrators },

  'applications.list': { roles: ownOrStaff },
  'applications.start': { roles: applicants },
  'application.read': { subject: 'application', roles: ownOrStaff },
  'application.write': { subject: 'application', roles: applicants },
  'application.submit': { subject: 'application', roles: applicants },
  'application.withdraw': { subject: 'application', roles: applicants },
  'application.assign': { subject: 'application', roles: reviewers },
  'application.review': { subject: 'application', roles: reviewers },
  'application.decide': { subject: 'application', roles: reviewers },
  'application.screen': { subject: 'application', roles: reviewers },
  'application.runs': { subject: 'application', roles: staffOnly },
  'application.try': { subject: 'application', roles: reviewers },
  'application.audit': {
    subject: 'application',
    roles: { ...nobody, reviewer: 'any', administrator: 'any', auditor: 'any' },
  },

  'run.read': { subject: 'run', roles: ownOrStaff },
  'run.try': { subject: 'run', roles: reviewers },
  // Each rule says which of these may set its findings aside.
  'run.waive': {
    subject: 'run',
    roles: { ...nobody, reviewer: 'any', planner: 'any', administrator: 'any' },
  },
  'run.download': { subject: 'run', roles: staffOnly },
  'run.retry': { subject: 'run', roles: administrators },

  'stuck-work.read': { roles: { ...administrators, auditor: 'any' } },
  'mail.retry': { roles: administrators },

  'files.upload': { roles: applicants },
  'file.read': { subject: 'file', roles: ownOrStaff },

  'mailbox.list': { demoOnly: true, roles: ownOrStaff },
  'mailbox.read': { demoOnly: true, subject: 'message', roles: ownOrStaff },

  'reports.list': { roles: ownOrStaff },
  'reports.request': { roles: applicants },
  'report.read': { subject: 'report', roles: ownOrStaff },

  'people.list': { roles: { ...nobody, administrator: 'any', auditor: 'any' } },
} as const satisfies Record<string, Rule>;

export type Action = keyof typeof access;

/** Throws for an action without a rule, which only an unchecked cast can bring here. */
export function getRule(action: string, rules: Readonly<Record<string, Rule>> = access): Rule {
  const rule = Object.hasOwn(rules, action) ? rules[action] : undefined;
  if (rule === undefined) {
    throw new Error(
      `access.ts has no rule: got action "${action}", expected one of ${Object.keys(rules).join(', ')}`,
    );
  }
  const missing = roles.filter((role) => rule.roles[role] === undefined);
  if (missing.length > 0) throw new Error(`access.ts, "${action}": no reach for ${missing.join(', ')}`);
  return rule;
}
