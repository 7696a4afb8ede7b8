import type { RemediesView } from '../../shared/schemas/remedies.ts';
import type { Deps } from '../context.ts';
import { askAboutStudy, getFinishedRun } from './named-studies.ts';

/** What would bring each finding of a run that is outside within its limit; computed when it is asked for. */
export async function getRemedies(deps: Deps, runId: string): Promise<RemediesView> {
  const { studySha256, ruleSet } = await getFinishedRun(deps, runId);
  const { found } = await askAboutStudy(deps, studySha256, 'remedies', { ruleSet });
  return { runId, ...found };
}
