import type { Finding } from './findings.ts';
import type { RuleStage, SetAside } from './rule-sets.ts';

export const runStates = ['queued', 'running', 'finished', 'failed'] as const;
export type RunState = (typeof runStates)[number];
export type RunKind = 'preliminary' | 'official';

/** One real step of the work, written as it is reached. */
export interface RunStep {
  key: string;
  label: string;
  percent: number;
  at: string;
}

/** The three maximum currents reported at one node, amperes; null where the node lacks the phases. */
export interface FaultCurrentsAmps {
  threePhase: number | null;
  lineGround: number | null;
  lineLine: number | null;
  lineLineGround: number | null;
}

/** What the reviewer's findings sheet shows beside the findings (staff only). */
export interface RunSummary {
  poi: { node: string; kv: number; before: FaultCurrentsAmps; after: FaultCurrentsAmps };
  devices: {
    id: string;
    kind: string;
    circuit: string | null;
    interruptingKa: number | null;
    beforeAmps: number;
    afterAmps: number;
    afterAvailableAmps: number;
    afterAvailableLoading: number | null;
  }[];
  nodeCount: number;
}

export interface WaivedFinding {
  question: string;
  element: string | null;
  reason: string;
  by: string;
  at: string;
  /** The second person who agreed; null where none has, or none is needed. */
  agreedBy: string | null;
}

/** What the run's rules say about open findings of one question. */
export interface QuestionTerms {
  stage: RuleStage;
  setAside: SetAside;
}

export interface RunView {
  publicId: string;
  applicationId: string;
  kind: RunKind;
  state: RunState;
  percent: number;
  steps: RunStep[];
  queuedAt: string;
  startedAt: string | null;
  finishedAt: string | null;
  /** Words for a person; the element at fault is named to staff only. */
  error: string | null;
  /** Empty until finished. Applicants get them without `element`. */
  findings: Finding[];
  notAskedYet: { id: string; question: string }[];
  waivers: WaivedFinding[];
  /** Staff only from here on. `stale` is asked of the database at reading. */
  /** By question. */
  terms: Record<string, QuestionTerms>;
  stale: boolean | null;
  staleReason: string | null;
  summary: RunSummary | null;
  warnings: string[];
  basis: RunBasisView | null;
}

export interface RunBasisView {
  modelCode: string;
  modelVersion: number;
  ruleSet: string;
  ahead: string[];
  revisionNumber: number;
  resultsVersion: number;
  basisSha256: string;
  studySha256: string | null;
  resultSha256: string | null;
}
