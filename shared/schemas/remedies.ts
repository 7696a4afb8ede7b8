import type { Finding } from './findings.ts';
import type { FindingPair, TrialChange } from './trials.ts';

/* What would bring a finding within its limit, computed, and what that does to all the others. */

export interface RemedyFigure {
  words: string;
  value: number;
  unit: string;
  /** Where the formula or the number is from. */
  source: string;
}

export interface Remedy {
  /** The finding that it is for. */
  question: string;
  element: string | null;
  /** What to do, as one sentence. */
  words: string;
  /** The same as a trial, so that it can be tried and kept. */
  changes: TrialChange[];
  figures: RemedyFigure[];
  /** Outside before and within after. */
  fixes: Finding[];
  /** What stands open all the same: outside, or needs data. */
  leaves: Finding[];
  /** What gets worse: another verdict, or nearer to its limit by over a hundredth of it. */
  worse: FindingPair[];
}

export interface RemediesView {
  runId: string;
  remedies: Remedy[];
  /** Findings outside their limit that nothing known brings within, each with what was tried. */
  without: { question: string; element: string | null; words: string }[];
}
