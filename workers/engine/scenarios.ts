import type { Scenario } from '../../shared/schemas/study.ts';
import type { CaseChoice } from './case.ts';
import { motorIdOf } from './motor-load.ts';

/* The operating cases that a study lists besides the model as it stands. */

/** What a scenario changes in any case. */
export function choiceOfScenario({
  switches = {},
  out = [],
}: Scenario): Pick<CaseChoice, 'switches' | 'out'> {
  return { switches: new Map(Object.entries(switches)), out: new Set([...out, ...out.map(motorIdOf)]) };
}

/** What a reader knows a scenario by. */
export function nameOf({ id, name }: Scenario): string {
  return name || id;
}
