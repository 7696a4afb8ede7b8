import type { Answer, Question } from '../server/compute-messages.ts';
import { listRemedies } from './engine/remedies/list-remedies.ts';
import { listTrialParts, tryChanges } from './engine/trials.ts';
import { getNamedStudy } from './kept-studies.ts';

/** The findings of a study with a few things changed. */
export function answerTrial({ ruleSet, changes, ...name }: Question<'trial'>): Answer<'trial'> {
  const named = getNamedStudy(name);
  if (named.kind !== 'study') return named;
  const tried = tryChanges(named.study, changes, ruleSet);
  if ('problems' in tried) return { kind: 'impossible', problems: tried.problems.first };
  return { kind: 'tried', findings: tried.findings };
}

export function answerRemedies({ ruleSet, ...name }: Question<'remedies'>): Answer<'remedies'> {
  const named = getNamedStudy(name);
  return named.kind === 'study' ? { kind: 'remedies', found: listRemedies(named.study, ruleSet) } : named;
}

export function answerTrialParts(name: Question<'trial-parts'>): Answer<'trial-parts'> {
  const named = getNamedStudy(name);
  return named.kind === 'study' ? { kind: 'parts', parts: listTrialParts(named.study) } : named;
}
