import type { AskedQuestionId, Comparison, Consequence } from './findings.ts';

/* A rule set says which questions are asked at which stage, with which limits and consequences: data, never code. */

/** One line that a value must keep: outside it, this follows. */
export type RuleLimit = { limit: number | null; comparison: Comparison; consequence: Consequence };

export type Rule = {
  stage: 'initial-review' | 'supplemental-review' | 'engineering';
  /** From the gravest to the mildest; the first that a value breaks is the one shown. */
  limits: [RuleLimit, ...RuleLimit[]];
  unit: string;
  /** The clause, as it is cited beside the value. */
  source: string;
  /** Whether the clause was read or its values come from memory; a remembered one needs confirming before a decision. */
  readOrMemory: 'read' | 'memory';
  /** Which size of a generator counts in an aggregate: all it can make, or what it may send out. */
  sizeBasis?: 'nameplate' | 'export';
  /** The prefault voltage, over nominal, that a voltage is judged at. */
  prefaultFactor?: number;
};

export type RuleSet = {
  format: 'feederwright.rule-set/1';
  code: string;
  number: number;
  name: string;
  rules: Record<AskedQuestionId, Rule>;
};
