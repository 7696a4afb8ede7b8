import type { Stage, WaitingOn } from './application-life.ts';

export interface ClockKind {
  key: string;
  label: string;
  /** In whose court the ball is while it runs. */
  waitingOn: Exclude<WaitingOn, 'nobody'>;
  allowedBusinessDays: number;
  /** The clause, and how it is known. */
  source: string;
  readOrMemory: 'read' | 'memory';
}

const kind = (
  key: string,
  label: string,
  waitingOn: ClockKind['waitingOn'],
  allowedBusinessDays: number,
  source: string,
  readOrMemory: ClockKind['readOrMemory'],
): ClockKind => ({ key, label, waitingOn, allowedBusinessDays, source, readOrMemory });

/** Time limits of the federal pro forma (Small Generator Interconnection Procedures), in business days. */
export const clockKinds = {
  completeness: kind(
    'completeness',
    'Check for completeness',
    'utility',
    10,
    'SGIP 1.3, read in a derived rule (20VAC5-314-50): complete or not, within 10 business days of receipt',
    'read',
  ),
  cure: kind(
    'cure',
    'Send what is missing',
    'applicant',
    10,
    'SGIP 1.3, read in a derived rule (20VAC5-314-50): 10 business days after the notice',
    'read',
  ),
  'initial-review': kind(
    'initial-review',
    'Initial review',
    'utility',
    15,
    'SGIP 2.2, read in a derived rule (20VAC5-314-60 B): 15 business days after the notice of completeness',
    'read',
  ),
  'supplemental-offer': kind(
    'supplemental-offer',
    'Accept supplemental review',
    'applicant',
    15,
    'SGIP 2.4.1, read in a derived rule (Minnesota): 15 business days after the offer',
    'read',
  ),
  'supplemental-review': kind(
    'supplemental-review',
    'Supplemental review',
    'utility',
    30,
    'SGIP 2.4.4, read in a derived rule (Minnesota): 30 business days after the deposit',
    'read',
  ),
  'feasibility-study': kind(
    'feasibility-study',
    'Feasibility study',
    'utility',
    30,
    'SGIP Attachment 6, value from memory: 30 business days after the agreement is signed',
    'memory',
  ),
  'system-impact-study': kind(
    'system-impact-study',
    'System impact study',
    'utility',
    30,
    'SGIP Attachment 7, value from memory: 30 business days after the agreement is signed (distribution)',
    'memory',
  ),
  'facilities-study': kind(
    'facilities-study',
    'Facilities study',
    'utility',
    45,
    'SGIP Attachment 8, value from memory: 45 business days where upgrades are needed',
    'memory',
  ),
  tender: kind(
    'tender',
    'Tender the agreement',
    'utility',
    5,
    'SGIP 2.2.2, value from memory: 5 business days after the determination',
    'memory',
  ),
  signing: kind(
    'signing',
    'Sign the agreement',
    'applicant',
    30,
    'SGIP 4.8, value from memory: 30 business days after it is tendered',
    'memory',
  ),
} as const satisfies Record<string, ClockKind>;

export type ClockKindKey = keyof typeof clockKinds;

/** The clock that starts when an application enters a stage; stages that no clause limits have none. */
export const clockOfStage: Partial<Record<Stage, ClockKindKey>> = {
  submitted: 'completeness',
  incomplete: 'cure',
  'initial-review': 'initial-review',
  'supplemental-offered': 'supplemental-offer',
  'supplemental-review': 'supplemental-review',
  'feasibility-study': 'feasibility-study',
  'system-impact-study': 'system-impact-study',
  'facilities-study': 'facilities-study',
  approved: 'tender',
  'agreement-tendered': 'signing',
};
