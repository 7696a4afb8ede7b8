import type { RuleSet } from '../../../shared/schemas/rule-sets.ts';
import type { Project, Study } from '../../../shared/schemas/study.ts';
import type { Model } from '../case.ts';
import type { SolvedCase } from '../solve-case.ts';
import type { StateSolver } from '../state-solver.ts';
import type { StateName } from '../states.ts';
import type { Upstream } from './upstream.ts';

/** What every question may ask about. */
export type Screening = {
  study: Study;
  project: Project;
  ruleSet: RuleSet;
  model: Model;
  /** The states at the voltage of the point of interconnection; `solver` has them for any other. */
  states: Record<StateName, SolvedCase>;
  solver: StateSolver;
  /** Index of the point of interconnection. */
  poi: number;
  upstream: Upstream;
};

/** Whether some source gives no z0, so that no ground-fault current can be relied on. */
export function lacksGroundSource({ study }: Screening): boolean {
  return (study.feeder.sources ?? []).some((source) => !source.max.z0);
}
