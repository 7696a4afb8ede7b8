import { findApplication, type Application } from '../../db/repositories/applications.ts';
import { listFindings, type Run } from '../../db/repositories/runs.ts';
import type { Finding } from '../../shared/schemas/findings.ts';
import type { FieldProblem } from '../../shared/schemas/problems.ts';
import { pairFindings } from '../../shared/rules/pair-findings.ts';
import type { TrialParts, TrialRequest, TrialView } from '../../shared/schemas/trials.ts';
import type { RefusedQuestion } from '../compute-messages.ts';
import type { Deps } from '../context.ts';
import { invalid, notFound } from '../errors.ts';
import { askAboutStudy, getFinishedRun } from './named-studies.ts';

/** What a trial may name. */
export async function getTrialParts(deps: Deps, runId: string): Promise<TrialParts> {
  const { studySha256 } = await getFinishedRun(deps, runId);
  return (await askAboutStudy(deps, studySha256, 'trial-parts', {})).parts;
}

/** `/changes/0/element` is that field of the form; anything else is in the study that the changes make. */
function toFieldProblems({ problems }: RefusedQuestion): FieldProblem[] {
  return problems.map(({ pointer, got, expected }) =>
    /^\/changes\/\d+\//.test(pointer)
      ? { path: pointer.slice(1).replaceAll('/', '.'), message: `Got ${got}, expected ${expected}` }
      : { path: 'changes', message: `${pointer}: got ${got}, expected ${expected}` },
  );
}

interface Tried {
  application: Application;
  run: Run;
  ofRun: Finding[];
  ofTrial: Finding[];
}

/** Computes a trial on a run of this application; nothing is written. */
export async function computeTrial(
  deps: Deps,
  applicationPublicId: string,
  { runId, changes }: TrialRequest,
): Promise<Tried> {
  const application = await findApplication(deps.db, applicationPublicId);
  if (application === undefined) throw notFound('The application');
  const { run, studySha256, ruleSet } = await getFinishedRun(deps, runId);
  if (run.applicationId !== application.id) throw notFound('The run');
  const answer = await askAboutStudy(deps, studySha256, 'trial', { ruleSet, changes });
  if (answer.kind === 'impossible')
    throw invalid(toFieldProblems(answer), 'These changes do not hold together');
  return { application, run, ofRun: await listFindings(deps.db, run.id), ofTrial: answer.findings };
}

/** The findings after the changes beside the run's. */
export async function tryOut(
  deps: Deps,
  applicationPublicId: string,
  request: TrialRequest,
): Promise<TrialView> {
  const { ofRun, ofTrial } = await computeTrial(deps, applicationPublicId, request);
  return { runId: request.runId, changes: request.changes, pairs: pairFindings(ofRun, ofTrial) };
}
