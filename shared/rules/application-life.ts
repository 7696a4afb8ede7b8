import type { Role } from '../schemas/sessions.ts';

/** Every stage an application can be in, in the order a person would tell them. */
export const stages = [
  'draft',
  'submitted',
  'incomplete',
  'initial-review',
  'supplemental-offered',
  'supplemental-review',
  'study-required',
  'feasibility-study',
  'system-impact-study',
  'facilities-study',
  'approved',
  'agreement-tendered',
  'agreement-executed',
  'witness-test',
  'permission-to-operate',
  'withdrawn',
  'denied',
  'lapsed',
] as const;
export type Stage = (typeof stages)[number];
export type WaitingOn = 'applicant' | 'utility' | 'nobody';

export type ApplicationEvent =
  | 'start'
  | 'submit'
  | 'ask-for-missing'
  | 'resubmit'
  | 'confirm-complete'
  | 'offer-supplemental'
  | 'accept-supplemental'
  | 'require-study'
  | 'begin-feasibility'
  | 'begin-system-impact'
  | 'begin-facilities'
  | 'approve'
  | 'deny'
  | 'tender-agreement'
  | 'execute-agreement'
  | 'schedule-witness-test'
  | 'permit-operation'
  | 'withdraw'
  | 'lapse';

export interface Transition {
  event: ApplicationEvent;
  from: readonly Stage[];
  to: Stage;
  waitingOn: WaitingOn;
  roles: readonly Role[];
  /** 'decision' and 'form' events have a route of their own; 'record' ones a reviewer notes with a reason. */
  by: 'form' | 'decision' | 'record';
}

const open: readonly Stage[] = [
  'submitted',
  'incomplete',
  'initial-review',
  'supplemental-offered',
  'supplemental-review',
  'study-required',
  'feasibility-study',
  'system-impact-study',
  'facilities-study',
];
const afterApproval: readonly Stage[] = [
  'approved',
  'agreement-tendered',
  'agreement-executed',
  'witness-test',
];
const applicant = ['applicant'] as const;
const reviewer = ['reviewer'] as const;

const step = (
  event: ApplicationEvent,
  from: readonly Stage[],
  to: Stage,
  waitingOn: WaitingOn,
  roles: readonly Role[],
  by: Transition['by'],
): Transition => ({ event, from, to, waitingOn, roles, by });

/** The one list of what can happen to an application, when, and by whom. */
export const transitions: readonly Transition[] = [
  step('submit', ['draft'], 'submitted', 'utility', applicant, 'form'),
  step('ask-for-missing', ['submitted'], 'incomplete', 'applicant', reviewer, 'form'),
  step('resubmit', ['incomplete'], 'submitted', 'utility', applicant, 'form'),
  step('confirm-complete', ['submitted'], 'initial-review', 'utility', reviewer, 'form'),
  step('offer-supplemental', ['initial-review'], 'supplemental-offered', 'applicant', reviewer, 'record'),
  step('accept-supplemental', ['supplemental-offered'], 'supplemental-review', 'utility', reviewer, 'record'),
  step(
    'require-study',
    ['initial-review', 'supplemental-review'],
    'study-required',
    'utility',
    reviewer,
    'decision',
  ),
  step('begin-feasibility', ['study-required'], 'feasibility-study', 'utility', reviewer, 'record'),
  step(
    'begin-system-impact',
    ['study-required', 'feasibility-study'],
    'system-impact-study',
    'utility',
    reviewer,
    'record',
  ),
  step('begin-facilities', ['system-impact-study'], 'facilities-study', 'utility', reviewer, 'record'),
  step(
    'approve',
    ['initial-review', 'supplemental-review', 'facilities-study'],
    'approved',
    'utility',
    reviewer,
    'decision',
  ),
  step(
    'deny',
    open.filter((stage) => stage !== 'incomplete' && stage !== 'submitted'),
    'denied',
    'nobody',
    reviewer,
    'decision',
  ),
  step('tender-agreement', ['approved'], 'agreement-tendered', 'applicant', reviewer, 'record'),
  step('execute-agreement', ['agreement-tendered'], 'agreement-executed', 'applicant', reviewer, 'record'),
  step('schedule-witness-test', ['agreement-executed'], 'witness-test', 'utility', reviewer, 'record'),
  step('permit-operation', ['witness-test'], 'permission-to-operate', 'nobody', reviewer, 'record'),
  step('withdraw', [...open, ...afterApproval], 'withdrawn', 'nobody', applicant, 'form'),
  step(
    'lapse',
    ['incomplete', 'supplemental-offered', 'agreement-tendered'],
    'lapsed',
    'nobody',
    reviewer,
    'record',
  ),
];

/** Stages in which nothing more is expected of anyone. */
export const closedStages: readonly Stage[] = ['permission-to-operate', 'withdrawn', 'denied', 'lapsed'];

/** The transition that `event` makes from `stage`, or undefined when it cannot happen there. */
export function findTransition(event: ApplicationEvent, stage: Stage): Transition | undefined {
  return transitions.find((candidate) => candidate.event === event && candidate.from.includes(stage));
}

/** Events that a person of this role may trigger from this stage. */
export function listAllowedEvents(stage: Stage, role: Role): ApplicationEvent[] {
  return transitions
    .filter((candidate) => candidate.from.includes(stage) && candidate.roles.includes(role))
    .map((candidate) => candidate.event);
}
