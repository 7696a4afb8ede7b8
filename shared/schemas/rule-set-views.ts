import type { Stage } from '../rules/application-life.ts';
import type { Comparison, Consequence, QuestionId, Verdict } from './findings.ts';
import type { Rule, RuleSet } from './rule-sets.ts';

/** One line of the list. */
export interface RuleSetRow {
  code: string;
  number: number;
  name: string;
  state: 'draft' | 'published';
  /** Decides on what is confirmed complete today. */
  inForce: boolean;
  validFrom: string | null;
  firstUsedAt: string | null;
  askedCount: number;
  unconfirmedCount: number;
}

export interface RuleSetView extends RuleSetRow {
  version: number;
  sha256: string;
  editedBy: string | null;
  editedAt: string | null;
  publishedBy: string | null;
  publishedAt: string | null;
  content: RuleSet;
  /** Questions that it does not ask and could, with the rule that asking them would begin from. */
  available: Partial<Record<QuestionId, Rule>>;
  /** Remembered rules that somebody has held against their clause. */
  confirmations: { question: string; by: string | null; at: string }[];
  /** Ids of the asked questions whose remembered clause nobody has confirmed. */
  unconfirmed: string[];
  /** The first day from which it could be in force, in the utility's zone. */
  earliestFrom: string;
}

export interface VerdictUnder {
  verdict: Verdict;
  comparison: Comparison;
  limit: number | null;
  consequence: Consequence;
}

/** A value that was measured, and what it would be called. */
export interface VerdictChange {
  question: string;
  element: string | null;
  value: number;
  unit: string;
  before: VerdictUnder;
  /** Null where the question would not be asked any more. */
  after: VerdictUnder | null;
}

export interface TouchedApplication {
  publicId: string;
  reference: string;
  name: string;
  organisation: string;
  stage: Stage;
  /** Whether a finished run is there to compare with. */
  screened: boolean;
  changes: VerdictChange[];
  /** Questions that only a new screening can answer: new ones, and those computed from other terms. */
  recomputed: string[];
}

/** Whom a publication would touch. Applications bound to rules keep theirs. */
export interface RuleSetPreview {
  /** Being written by their organisations; the rules of the day of their completeness bind them. */
  draftCount: number;
  applications: TouchedApplication[];
}
