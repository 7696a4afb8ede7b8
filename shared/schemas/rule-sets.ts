import type { Comparison, Consequence, Question, QuestionId } from './findings.ts';
import { questions } from './findings.ts';
import type { ClockKindKey } from '../rules/clock-kinds.ts';

/* A rule set says which questions are asked at which stage, with which limits and consequences: data, never code. */

/** One line that a value must keep: outside it, this follows. */
export type RuleLimit = { limit: number | null; comparison: Comparison; consequence: Consequence };

export type RuleStage = 'initial-review' | 'supplemental-review' | 'engineering';

/** How a value is known: read in its document, or remembered. */
export type Standing = 'read' | 'memory';

/** Roles that a rule may trust with setting a finding aside. */
export const setAsideRoles = ['reviewer', 'planner', 'administrator'] as const;

/** Who may set a finding aside, and whether a second of them must agree before it counts. */
export type SetAside = { roles: (typeof setAsideRoles)[number][]; secondPerson: boolean };

export type ClockRule = {
  allowedDays: number;
  unit: 'business-day' | 'calendar-day';
  source: string;
  readOrMemory: Standing;
};

/** A charge: a fixed part and one for each kilowatt, in whole cents. */
export type Fee = {
  label: string;
  currency: string;
  baseCents: number;
  perKwCents: number;
  source: string;
  readOrMemory: Standing;
};

export type Rule = {
  stage: RuleStage;
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
  /** What else the question needs, each under a name that its answer documents, with the unit in it. */
  parameters?: Record<string, number | string | boolean>;
  /** What the aggregate is taken over, in words: the circuit, the line section, the secondary. */
  scope?: string;
  /** Absent: a reviewer alone. */
  setAside?: SetAside;
};

/** Largest sizes of certified inverters where a line has this voltage; without an upper end up to the table's highest. */
export type FastTrackRow = {
  fromKv: number;
  belowKv: number | null;
  anywhereKw: number;
  /** On a mainline and near enough to the substation. */
  mainlineKw: number;
  source: string;
  readOrMemory: Standing;
};

/** What is small enough for Fast Track; above the highest voltage nothing is. */
export type FastTrack = {
  rows: FastTrackRow[];
  mainlineMiles: number;
  machinesKw: number;
  maximumKv: number;
  source: string;
  readOrMemory: Standing;
};

export type RuleSet = {
  format: 'feederwright.rule-set/1';
  code: string;
  number: number;
  name: string;
  /** By question; one that is not here is not asked. */
  rules: Partial<Record<QuestionId, Rule>>;
  /** Time limits; one that is not here is the federal pro forma's. */
  clocks?: Partial<Record<ClockKindKey, ClockRule>>;
  fees?: Fee[];
  /** Asked about by `fast-track-size`. */
  fastTrack?: FastTrack;
  /** What gives a place in the queue; absent: completeness. */
  queueOrder?: 'receipt' | 'completeness';
};

/** The questions that a rule set asks, in the order in which answers are shown. */
export function listAsked(ruleSet: RuleSet): Question[] {
  return questions.filter(({ id }) => ruleSet.rules[id] !== undefined);
}

/** The questions that it does not ask: a screen lists them as not asked, never as passed. */
export function listNotAsked(ruleSet: RuleSet): Question[] {
  return questions.filter(({ id }) => ruleSet.rules[id] === undefined);
}
