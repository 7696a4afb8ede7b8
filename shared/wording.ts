import type { Stage, WaitingOn } from './rules/application-life.ts';
import type { EquipmentKind } from './schemas/equipment.ts';
import type { DecisionKind } from './schemas/applications.ts';
import type { PaperPurpose, AnswerSection } from './schemas/answers.ts';
import type { Role } from './schemas/sessions.ts';

/** How loudly a state is drawn: `wrong` is kept for what somebody must repair. */
export type Tone = 'quiet' | 'active' | 'waiting' | 'wrong' | 'settled';

export interface Words {
  label: string;
  tone: Tone;
  meaning: string;
}

const words = (label: string, tone: Tone, meaning: string): Words => ({ label, tone, meaning });

export const stageWords: Record<Stage, Words> = {
  draft: words('Draft', 'quiet', 'Being written; the utility has not received it.'),
  submitted: words('Received', 'active', 'The utility checks that everything needed is there.'),
  incomplete: words('Incomplete', 'waiting', 'The utility asked for something that is missing.'),
  'initial-review': words('Initial review', 'active', 'Complete, in the queue, and being screened.'),
  'supplemental-offered': words(
    'Supplemental review offered',
    'waiting',
    'The applicant may accept a closer review.',
  ),
  'supplemental-review': words('Supplemental review', 'active', 'A closer review is under way.'),
  'study-required': words(
    'Study required',
    'active',
    'Screening was not enough; a study must answer the rest.',
  ),
  'feasibility-study': words(
    'Feasibility study',
    'active',
    'A first study looks for what stands in the way.',
  ),
  'system-impact-study': words(
    'System impact study',
    'active',
    'A study of what the project does to the system.',
  ),
  'facilities-study': words('Facilities study', 'active', 'A study of what must be built, and at what cost.'),
  approved: words('Approved', 'settled', 'The project may connect as decided; an agreement follows.'),
  'agreement-tendered': words(
    'Agreement tendered',
    'waiting',
    'The agreement is with the applicant to sign.',
  ),
  'agreement-executed': words('Agreement executed', 'settled', 'Signed by both; the project is being built.'),
  'witness-test': words('Witness test', 'active', 'The utility watches the commissioning test.'),
  'permission-to-operate': words(
    'Permission to operate',
    'settled',
    'The project may run in parallel with the feeder.',
  ),
  withdrawn: words('Withdrawn', 'quiet', 'The applicant took it back.'),
  denied: words('Denied', 'quiet', 'Refused with reasons.'),
  lapsed: words('Lapsed', 'quiet', 'A time limit of the applicant passed.'),
};

export const waitingWords: Record<WaitingOn, string> = {
  applicant: 'Waiting for the applicant',
  utility: 'Waiting for the utility',
  nobody: 'Nothing is awaited',
};

export const verdictWords: Record<'within' | 'outside' | 'needs-data' | 'not-applicable', Words> = {
  within: words('Within the limit', 'settled', 'The measured value meets the limit.'),
  outside: words('Outside the limit', 'wrong', 'The measured value does not meet the limit.'),
  'needs-data': words('Needs data', 'waiting', 'It could not be computed; something it needs is missing.'),
  'not-applicable': words('Does not apply', 'quiet', 'The question cannot arise for this project.'),
};

export const notAskedWords = words(
  'Not asked yet',
  'quiet',
  'This version does not compute it; it is not passed.',
);

export const decisionWords: Record<DecisionKind, Words> = {
  approve: words('Approve', 'settled', 'The project may connect as applied for, with the conditions given.'),
  'require-study': words(
    'Require a study',
    'active',
    'The screening leaves questions that only a study answers.',
  ),
  deny: words('Deny', 'wrong', 'The project cannot be connected, for the reasons given.'),
};

export const equipmentWords: Record<EquipmentKind, string> = {
  'pv-inverter': 'Solar inverter',
  'battery-inverter': 'Battery inverter',
  'synchronous-machine': 'Synchronous machine',
  'induction-machine': 'Induction machine',
  transformer: 'Transformer',
};

export const purposeWords: Record<PaperPurpose, string> = {
  'one-line-diagram': 'One-line diagram',
  'site-plan': 'Site plan',
  'equipment-sheet': 'Equipment sheet',
  'listing-certificate': 'Listing certificate',
  'site-control': 'Proof of site control',
  other: 'Another paper',
};

export const sectionWords: Record<AnswerSection, string> = {
  project: 'Project and contact',
  site: 'Site',
  equipment: 'Equipment',
  connection: 'Connection',
  papers: 'Papers',
};

export const roleWords: Record<Role, string> = {
  applicant: 'Applicant',
  reviewer: 'Reviewer',
  planner: 'Planner',
  administrator: 'Administrator',
  auditor: 'Auditor',
};

/** Shown wherever results are shown, on screen, on paper and in mail. */
export const caution =
  'These results support engineering judgement. Local codes and the utility’s own standards govern, and a licensed engineer decides.';
