import { Type, type Static } from '@sinclair/typebox';
import { manyLines, oneLine } from './text.ts';
import type { ApplicationEvent, Stage, WaitingOn } from '../rules/application-life.ts';
import type { Answers, AnswerSection, CompleteAnswers } from './answers.ts';
import type { PaperView } from './files.ts';
import type { GeneratorKind } from './equipment.ts';
import type { RunView } from './runs.ts';

/** `version` of the application row as the person saw it; a mismatch is refused and says who changed what. */
const version = Type.Integer({ minimum: 1, errorMessage: 'Load the page again' });
const reason = (words: string) => manyLines(`${words}, in 3 to 4,000 characters`, 4000, 3);

export const SaveSection = Type.Object(
  { version: Type.Integer({ minimum: 1, errorMessage: 'Load the page again' }), answers: Type.Unknown() },
  { additionalProperties: false },
);
export type SaveSection = Static<typeof SaveSection>;

export const Submission = Type.Object(
  {
    version,
    attestedBy: oneLine('Enter your full name', 120, 2),
    agrees: Type.Literal(true, { errorMessage: 'Confirm that the answers are true and complete' }),
  },
  { additionalProperties: false },
);
export type Submission = Static<typeof Submission>;

export const Withdrawal = Type.Object(
  { version, reason: reason('Say why the application is withdrawn') },
  { additionalProperties: false },
);
export type Withdrawal = Static<typeof Withdrawal>;

export const ReviewerChange = Type.Object(
  {
    version,
    reviewer: Type.Union([Type.Literal('me'), Type.Null()], { errorMessage: 'Take it or put it back' }),
  },
  { additionalProperties: false },
);
export type ReviewerChange = Static<typeof ReviewerChange>;

export const Completeness = Type.Object({ version }, { additionalProperties: false });
export type Completeness = Static<typeof Completeness>;

export const Deficiency = Type.Object(
  {
    version,
    items: Type.Array(
      Type.Object(
        {
          section: Type.Union(
            (['project', 'site', 'equipment', 'connection', 'papers'] as const).map((s) => Type.Literal(s)),
            { errorMessage: 'Choose the part of the application' },
          ),
          text: reason('Say what is missing'),
        },
        { additionalProperties: false },
      ),
      { minItems: 1, maxItems: 20, errorMessage: 'Name at least one thing that is missing' },
    ),
  },
  { additionalProperties: false },
);
export type Deficiency = Static<typeof Deficiency>;

export const decisionKinds = ['approve', 'require-study', 'deny'] as const;
export type DecisionKind = (typeof decisionKinds)[number];

export const Decision = Type.Object(
  {
    version,
    kind: Type.Union(
      decisionKinds.map((kind) => Type.Literal(kind)),
      { errorMessage: 'Choose a decision' },
    ),
    /** Public id of the official run that the decision rests on. */
    runId: Type.String({ minLength: 1, maxLength: 64, errorMessage: 'Name the run the decision rests on' }),
    reason: reason('Give the reason for the decision'),
    conditions: Type.Optional(manyLines('Conditions must be 4,000 characters or fewer', 4000)),
  },
  { additionalProperties: false },
);
export type Decision = Static<typeof Decision>;

/** Setting aside one finding of a run, with the reason that goes into the letter. */
export const Waiver = Type.Object(
  {
    question: Type.String({ minLength: 1, maxLength: 80 }),
    element: Type.Optional(Type.String({ maxLength: 200 })),
    reason: reason('Say why the finding can be set aside'),
  },
  { additionalProperties: false },
);
export type Waiver = Static<typeof Waiver>;

/** A second person agrees to what one has set aside, with the reason as they read it. */
export const WaiverAgreement = Waiver;
export type WaiverAgreement = Waiver;

/** A later step of the life that a reviewer records by hand (agreement tendered, witness test, ...). */
export const Move = Type.Object(
  { version, event: Type.String({ minLength: 1, maxLength: 60 }), note: reason('Say what happened') },
  { additionalProperties: false },
);
export type Move = Static<typeof Move>;

export const worklistSorts = ['number', 'name', 'stage', 'size', 'received', 'due', 'outside'] as const;
export type WorklistSort = (typeof worklistSorts)[number];

/** Query of GET /api/applications; everything is optional and kept in the page's address. */
export interface WorklistQuery {
  page: number;
  pageSize: number;
  sort: WorklistSort;
  direction: 'asc' | 'desc';
  stage?: Stage;
  assigned?: 'mine' | 'unassigned';
  outside?: boolean;
  search?: string;
}

export interface ApplicationRow {
  publicId: string;
  /** As people quote it, e.g. "ML-1042". */
  reference: string;
  name: string;
  organisation: string;
  place: string | null;
  circuit: string | null;
  kind: GeneratorKind | null;
  sizeKw: number | null;
  stage: Stage;
  waitingOn: WaitingOn;
  reviewer: { publicId: string; name: string } | null;
  receivedOn: string | null;
  clock: ClockView | null;
  /** Findings outside their limit or without data in the newest finished run; null while nothing is computed. */
  outsideCount: number | null;
  needsDataCount: number | null;
  updatedAt: string;
}

export interface Worklist {
  rows: ApplicationRow[];
  total: number;
  overdue: number;
  page: number;
  pageSize: number;
}

/** `usedDays` is counted up to today, without pauses. */
export interface ClockView {
  kind: string;
  label: string;
  unit: 'business-day' | 'calendar-day';
  allowedDays: number;
  usedDays: number;
  startedOn: string;
  dueOn: string;
  state: 'running' | 'paused' | 'stopped' | 'overdue';
}

export interface StageEventView {
  seq: number;
  event: ApplicationEvent;
  fromStage: Stage | null;
  toStage: Stage;
  /** Applicants read "the utility" for staff. */
  actor: string;
  note: string | null;
  at: string;
}

export interface DecisionView {
  kind: DecisionKind;
  reason: string;
  conditions: string | null;
  runId: string;
  by: string;
  at: string;
}

export interface InformationRequestView {
  items: { section: AnswerSection; text: string }[];
  askedBy: string;
  askedAt: string;
  answeredAt: string | null;
}

/** Everything one page about an application needs; what an applicant may not know is absent or null. */
export interface ApplicationView extends ApplicationRow {
  version: number;
  /** Answers of the newest revision; null while it is a draft that was never submitted. */
  answers: CompleteAnswers | null;
  papers: PaperView[];
  revisionNumber: number | null;
  attestedBy: string | null;
  attestedAt: string | null;
  queuePosition: number | null;
  aheadCount: number | null;
  clocks: ClockView[];
  events: StageEventView[];
  requests: InformationRequestView[];
  decision: DecisionView | null;
  /** Newest run the reader may see: staff any, applicants preliminary ones, official ones once decided. */
  run: RunView | null;
  /** Events that this person may trigger now, by the state machine. */
  allowed: ApplicationEvent[];
  poi: { modelCode: string; node: string; circuit: string; kv: number; lat: number; lng: number } | null;
  ruleSet: { code: string; number: number; name: string } | null;
}

export interface DraftView {
  applicationId: string;
  reference: string;
  version: number;
  answers: Answers;
  papers: PaperView[];
  sections: { section: AnswerSection; state: 'completed' | 'in-progress' | 'not-started' }[];
  /** Set while the utility waits for answers to an information request. */
  request: InformationRequestView | null;
  updatedAt: string;
}
