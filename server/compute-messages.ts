import type { Finding } from '../shared/schemas/findings.ts';
import type {
  PreApplicationFigures,
  PreApplicationReport,
} from '../shared/schemas/pre-application-reports.ts';
import type { RemediesView } from '../shared/schemas/remedies.ts';
import type { Room } from '../shared/schemas/rooms.ts';
import type { RuleSet } from '../shared/schemas/rule-sets.ts';
import type { Sheet, SheetOrigin } from '../shared/schemas/sheets.ts';
import type { RunSummary } from '../shared/schemas/runs.ts';
import type { TrialChange, TrialParts } from '../shared/schemas/trials.ts';

/* What the resident compute child and the process that started it say to each other; bytes stay bytes on the way. */

/** A step that is about to be taken: `done` of `total` are behind it. */
export interface ComputeStep {
  key: string;
  label: string;
  done: number;
  total: number;
}

/** A study that cannot be run: one line for each thing that is wrong with it. */
export interface RefusedStudy {
  kind: 'refused';
  problems: string[];
}

export type StudyAnswer =
  | {
      kind: 'computed';
      /** Exactly what the command line prints for the same study and rule set. */
      resultBytes: Uint8Array;
      findings: Finding[];
      warnings: string[];
      summary: RunSummary | null;
    }
  | RefusedStudy;

/** A study by the SHA-256 of its bytes, in hexadecimal; the bytes are sent where the child has said that it lacks them. */
export interface NamedStudy {
  studySha256: string;
  studyBytes?: Uint8Array;
}

/** The child keeps a few studies only, and not this one: ask again with its bytes. */
export interface NotKept {
  kind: 'not-kept';
}

/** What was asked cannot be: the fields in question, as `/changes/0/element`, or places in the study. */
export interface RefusedQuestion {
  kind: 'impossible';
  problems: { pointer: string; got: string; expected: string }[];
}

/** By kind: what is asked of the child, and what it answers. */
export interface ComputeKinds {
  study: { question: { studyBytes: Uint8Array; ruleSet: RuleSet }; answer: StudyAnswer };
  trial: {
    question: NamedStudy & { ruleSet: RuleSet; changes: TrialChange[] };
    answer: { kind: 'tried'; findings: Finding[] } | RefusedQuestion | RefusedStudy | NotKept;
  };
  remedies: {
    question: NamedStudy & { ruleSet: RuleSet };
    answer: { kind: 'remedies'; found: Omit<RemediesView, 'runId'> } | RefusedStudy | NotKept;
  };
  /** Every node of a model; the study has no project. */
  room: {
    question: { studyBytes: Uint8Array; ruleSet: RuleSet };
    answer: { kind: 'room'; room: Room } | RefusedStudy;
  };
  'trial-parts': {
    question: NamedStudy;
    answer: { kind: 'parts'; parts: TrialParts } | RefusedStudy | NotKept;
  };
  /** `node` is one of the feeder; the study has no project. */
  'pre-application': {
    question: { studyBytes: Uint8Array; ruleSet: RuleSet; node: string };
    answer: PreApplicationFigures;
  };
  /** The working sheet of a study with a project; `resultSha256` is that of the result it comes from, in hexadecimal. */
  sheet: {
    question: { studyBytes: Uint8Array; ruleSet: RuleSet; origin: SheetOrigin };
    answer: { kind: 'sheet'; sheet: Sheet; resultSha256: string } | RefusedStudy;
  };
  'sheet-pdf': {
    question: { sheet: Sheet; paper: 'a4' | 'letter'; madeAt: Date };
    answer: Uint8Array;
  };
  'pre-application-pdf': {
    question: { report: PreApplicationReport; utility: string; timeZone: string; paper: 'a4' | 'letter' };
    answer: Uint8Array;
  };
}

export type ComputeKind = keyof ComputeKinds;
export type Question<K extends ComputeKind> = ComputeKinds[K]['question'];
export type Answer<K extends ComputeKind> = ComputeKinds[K]['answer'];

export interface ComputeRequest<K extends ComputeKind = ComputeKind> {
  id: number;
  kind: K;
  question: Question<K>;
}

export type ComputeReply =
  | { id: number; kind: 'step'; step: ComputeStep }
  | { id: number; kind: 'answer'; answer: Answer<ComputeKind> }
  /** The engine threw: a fault of ours, not of the study. */
  | { id: number; kind: 'fault'; message: string };
