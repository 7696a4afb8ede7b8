import type { Finding, QuestionId } from '../../../shared/schemas/findings.ts';
import type { RemedyFigure } from '../../../shared/schemas/remedies.ts';
import type { RuleSet } from '../../../shared/schemas/rule-sets.ts';
import type { TrialChange } from '../../../shared/schemas/trials.ts';
import type { ProjectStudy } from '../findings/make-screening.ts';
import { tryChanges } from '../trials.ts';

/* What those who look for a remedy are handed, and how they look. */

export type Search = {
  study: ProjectStudy;
  ruleSet: RuleSet;
  /** The finding that is outside. */
  finding: Finding;
  /** Whether with these changes nothing of the question is outside but what is already, besides this finding. */
  holds: (changes: readonly TrialChange[]) => boolean;
};

/** A remedy before it has met all the other findings. */
export type Proposal = { words: string; changes: TrialChange[]; figures: RemedyFigure[] };

/** Gives the remedy, or one sentence on what was tried in vain; nothing where it is no remedy for such a project. */
export type Proposer = (search: Search) => Proposal | string | undefined;

/** Questions whose answer another's rests on. */
const restsOn: Partial<Record<QuestionId, readonly QuestionId[]>> = {
  'transformer-connection': ['effective-grounding', 'inverter-grounding'],
};

/** Makes a search that asks the one question alone: many sizes are tried, and the others are asked at the end. */
export function makeSearch(
  study: ProjectStudy,
  ruleSet: RuleSet,
  finding: Finding,
  all: readonly Finding[],
): Search {
  const id = finding.id as QuestionId;
  const asked = new Set<string>([id, ...(restsOn[id] ?? [])]);
  const rules = Object.fromEntries(Object.entries(ruleSet.rules).filter(([each]) => asked.has(each)));
  const alone: RuleSet = { ...ruleSet, rules };
  // Of several that are outside, each is mended by itself.
  const others = new Set(
    all
      .filter((each) => each.id === id && each.verdict === 'outside' && each.element !== finding.element)
      .map(({ element }) => element),
  );
  const holds = (changes: readonly TrialChange[]) => {
    const tried = tryChanges(study, changes, alone);
    if ('problems' in tried) return false;
    return tried.findings.every(
      (each) => each.id !== id || each.verdict !== 'outside' || others.has(each.element),
    );
  };
  return { study, ruleSet, finding, holds };
}

/**
 * Finds the last of `first … last` for which it holds, if it holds for `first` and, from some number on, for none: the
 * worst of a quantity that grows. Nothing where it does not even hold for `first`.
 */
export function findLast(
  first: number,
  last: number,
  holds: (number: number) => boolean,
): number | undefined {
  if (!holds(first)) return undefined;
  let within = first;
  let outside = last + 1;
  while (outside - within > 1) {
    const middle = Math.floor((within + outside) / 2);
    if (holds(middle)) within = middle;
    else outside = middle;
  }
  return within;
}
