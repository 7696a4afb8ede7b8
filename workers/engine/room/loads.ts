import type { QuestionId } from '../../../shared/schemas/findings.ts';
import type { RuleSet } from '../../../shared/schemas/rule-sets.ts';
import type { Study } from '../../../shared/schemas/study.ts';
import type { Model } from '../case.ts';
import type { OperatingCase } from '../findings/operating-cases.ts';
import { answerQuestions } from '../findings/questions.ts';
import type { Screening } from '../findings/screening.ts';
import { makeBareProject, type PlantKind } from './plants.ts';
import type { Test } from './sizes.ts';
import { measureFindings } from './sizes.ts';

/*
 * Questions that ask how much generates where, and of the grid's strength: they are put as they are, with a plant straight at
 * the node. The networks they are handed are those without the plant, which none of them looks into for it.
 */

/** Whose answer hangs on the devices on the way to the source alone: the same for all nodes behind the same devices. */
export const zoneQuestions = [
  'section-peak-load',
  'transient-stability',
  'minimum-load',
  'high-side-float',
  'load-rejection',
  'islanding',
] as const satisfies readonly QuestionId[];

/** Whose answer hangs on the node itself. */
export const nodeQuestions = [
  'fast-track-size',
  'spot-network',
  'short-circuit-ratio',
] as const satisfies readonly QuestionId[];

/** What does not change from node to node. */
type LoadGround = {
  study: Study;
  model: Model;
  states: Screening['states'];
  ruleSet: RuleSet;
};

/** A place that is asked with one size after another. */
export type LoadPlace = { test: Test; lacking: readonly string[] };

/** Makes ready a node for some of the questions; `cases` have its ways to the sources. */
export function placeLoads(
  { study, model, states, ruleSet }: LoadGround,
  cases: readonly OperatingCase[],
  node: number,
  kind: PlantKind,
  questions: readonly QuestionId[],
): LoadPlace {
  const { id } = model.nodes[node]!;
  const rules = Object.fromEntries(
    questions.flatMap((each) => (ruleSet.rules[each] ? [[each, ruleSet.rules[each]]] : [])),
  );
  const findingsAt = (kva: number) => {
    const project = makeBareProject(kind, id, kva);
    return answerQuestions({
      ...{ study: { ...study, project }, project, ruleSet: { ...ruleSet, rules }, model, states, cases },
      poi: node,
      upstream: cases[0]!.upstream,
    });
  };
  // Outside without a number is said of the kind of plant, not of its size; what lacks data says nothing of it.
  const smallest = findingsAt(1);
  const ofKind = smallest.filter(({ verdict, value }) => verdict === 'outside' && value === null);
  const lacking = smallest.filter(({ verdict }) => verdict === 'needs-data');
  const skipped = new Set([...ofKind, ...lacking].map((finding) => finding.id));
  return {
    test: (kva) => measureFindings(findingsAt(kva).filter(({ id: each }) => !skipped.has(each))),
    lacking: [...new Set(lacking.map((finding) => finding.id))],
  };
}
