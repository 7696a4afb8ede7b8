import type { RuleSet } from '../../../shared/schemas/rule-sets.ts';
import type { Project, Study } from '../../../shared/schemas/study.ts';
import { nodeAt } from '../model-parts.ts';
import { prepareModel } from '../prepare-model.ts';
import { makeStateSolvers } from '../state-solver.ts';
import { listCases } from './operating-cases.ts';
import type { Screening } from './screening.ts';
import { traceUpstream } from './upstream.ts';

/** A study with a project in it. */
export type ProjectStudy = Study & { project: Project };

/** Makes a study ready for its questions, without what a whole study reports of every node and device. */
export function makeScreening(study: ProjectStudy, ruleSet: RuleSet): Screening {
  const { project } = study;
  const model = prepareModel(study);
  const operating = makeStateSolvers(study, model);
  const poi = model.nodeIndex.get(project.node)!;
  const { kv } = nodeAt(model, poi);
  const solve = (state: 'none' | 'before' | 'after' | 'minimum') => operating.base.solve(state, kv);
  const states = {
    none: solve('none'),
    before: solve('before'),
    after: solve('after'),
    minimum: solve('minimum'),
  };
  const upstream = traceUpstream(model, states.after.choice, poi);
  const cases = listCases({ operating, model, kv, poi, upstream });
  return { study, project, ruleSet, model, states, poi, upstream, cases };
}
