import type { RuleSet } from '../../../shared/schemas/rule-sets.ts';
import type { Project, Study } from '../../../shared/schemas/study.ts';
import type { Model } from '../case.ts';
import type { SolvedCase } from '../solve-case.ts';
import type { StateName } from '../states.ts';
import type { OperatingCase } from './operating-cases.ts';
import type { Upstream } from './upstream.ts';

/** What every question may ask about. */
export type Screening = {
  study: Study;
  project: Project;
  ruleSet: RuleSet;
  model: Model;
  /** The states of the model as it stands, at the voltage of the point of interconnection. */
  states: Record<StateName, SolvedCase>;
  /** The model as it stands, first, and all scenarios: their solvers have the states at any voltage. */
  cases: readonly OperatingCase[];
  /** Index of the point of interconnection. */
  poi: number;
  /** Of the model as it stands. */
  upstream: Upstream;
};

/** Whether some source gives no z0, so that no ground-fault current can be relied on. */
export function lacksGroundSource({ study }: Screening): boolean {
  return (study.feeder.sources ?? []).some((source) => !source.max.z0);
}
