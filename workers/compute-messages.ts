import type { RuleSet } from '../shared/schemas/rule-sets.ts';
import type { StudyAnswer } from './compute-study.ts';
import type { StudyStep } from './engine/run-study.ts';

/* What the resident child and the process that started it say to each other; bytes stay bytes on the way. */

export interface ComputeRequest {
  id: number;
  kind: 'study';
  studyBytes: Uint8Array;
  ruleSet: RuleSet;
}

export type ComputeReply =
  | { id: number; kind: 'step'; step: StudyStep }
  | { id: number; kind: 'answer'; answer: StudyAnswer }
  /** The engine threw: a fault of ours, not of the study. */
  | { id: number; kind: 'fault'; message: string };
