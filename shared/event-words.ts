import type { ApplicationEvent } from './rules/application-life.ts';

/** What happened, in the past tense, as the ledger tells it. */
export const eventWords: Record<ApplicationEvent, string> = {
  start: 'Draft begun',
  submit: 'Submitted',
  'ask-for-missing': 'Missing information asked for',
  resubmit: 'Handed in again',
  'confirm-complete': 'Confirmed complete; took its place in the queue',
  'offer-supplemental': 'Supplemental review offered',
  'accept-supplemental': 'Supplemental review accepted',
  'require-study': 'Study required',
  'begin-feasibility': 'Feasibility study begun',
  'begin-system-impact': 'System impact study begun',
  'begin-facilities': 'Facilities study begun',
  approve: 'Approved',
  deny: 'Denied',
  'tender-agreement': 'Agreement tendered',
  'execute-agreement': 'Agreement executed',
  'schedule-witness-test': 'Witness test set',
  'permit-operation': 'Permission to operate given',
  withdraw: 'Withdrawn',
  lapse: 'Lapsed',
};

/** The same as something that a reviewer may do next. */
export const recordWords: Partial<Record<ApplicationEvent, string>> = {
  'offer-supplemental': 'Offer supplemental review',
  'accept-supplemental': 'Record acceptance of supplemental review',
  'begin-feasibility': 'Begin the feasibility study',
  'begin-system-impact': 'Begin the system impact study',
  'begin-facilities': 'Begin the facilities study',
  'tender-agreement': 'Tender the agreement',
  'execute-agreement': 'Record the executed agreement',
  'schedule-witness-test': 'Set the witness test',
  'permit-operation': 'Give permission to operate',
  lapse: 'Record that it lapsed',
};
