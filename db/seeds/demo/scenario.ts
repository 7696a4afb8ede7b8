import type { ApplicationEvent } from '../../../shared/rules/application-life.ts';
import type { AnswerSection, WindingConnection } from '../../../shared/schemas/answers.ts';

/** One application as the demo's author thinks of it; everything else is worked out from these lines. */
export interface Scenario {
  name: string;
  applicantEmail: string;
  reviewerEmail: string | null;
  circuit: string;
  /** A junction, or a road that the circuit's poles stand on. */
  near: string;
  /** Equipment codes with how many of each. */
  units: readonly (readonly [code: string, count: number])[];
  /** Absent for one-phase projects and for those that share a service. */
  transformer?: readonly [code: string, windings: WindingConnection];
  /** Reactor in the neutral of a grounded utility-side winding; absent: solidly grounded. */
  utilityNeutralOhm?: number;
  machineNeutral?: 'solid' | 'ungrounded';
  exportKw?: number;
  description: string;
  path: readonly ApplicationEvent[];
  lastEventDaysAgo: number;
  /** What was said at an event, where the customary words will not do. */
  notes?: Partial<Record<ApplicationEvent, string>>;
  missing?: readonly { section: AnswerSection; text: string }[];
  conditions?: string;
}

const submitted = ['start', 'submit'] as const;
const complete = [...submitted, 'confirm-complete'] as const;
const studied = [...complete, 'require-study', 'begin-system-impact'] as const;
const answered = [...complete, 'offer-supplemental', 'accept-supplemental', 'approve'] as const;
const signed = ['tender-agreement', 'execute-agreement'] as const;
const agreed = [...complete, 'approve', ...signed] as const;

/** The ways through the life of an application that the demo shows, by where they end. */
export const paths = {
  draft: ['start'],
  submitted,
  resubmitted: [...submitted, 'ask-for-missing', 'resubmit'],
  incomplete: [...submitted, 'ask-for-missing'],
  initialReview: complete,
  supplementalOffered: [...complete, 'offer-supplemental'],
  supplementalReview: [...complete, 'offer-supplemental', 'accept-supplemental'],
  studyRequired: [...complete, 'require-study'],
  feasibility: [...complete, 'require-study', 'begin-feasibility'],
  systemImpact: studied,
  facilities: [...studied, 'begin-facilities'],
  approved: [...complete, 'approve'],
  approvedAfterStudy: [...studied, 'begin-facilities', 'approve'],
  approvedAfterSupplemental: answered,
  tenderedAfterSupplemental: [...answered, 'tender-agreement'],
  executedAfterSupplemental: [...answered, ...signed],
  operatingAfterSupplemental: [...answered, ...signed, 'schedule-witness-test', 'permit-operation'],
  witnessTest: [...agreed, 'schedule-witness-test'],
  operating: [...agreed, 'schedule-witness-test', 'permit-operation'],
  withdrawnEarly: [...submitted, 'withdraw'],
  withdrawnInStudy: [...complete, 'require-study', 'withdraw'],
  denied: [...complete, 'require-study', 'begin-feasibility', 'deny'],
  lapsed: [...submitted, 'ask-for-missing', 'lapse'],
} as const satisfies Record<string, readonly ApplicationEvent[]>;

export const people = {
  ines: 'ines@greenmarch.example',
  samir: 'samir@greenmarch.example',
  briony: 'briony@valefarms.example',
  chidi: 'chidi@okonjolund.example',
  petra: 'petra@okonjolund.example',
  rosalind: 'rosalind@lathbourne.example',
  dov: 'dov@hearthside.example',
  tobiah: 'tobiah@marrowbank.example',
  yuki: 'yuki@marrowbank.example',
} as const;
