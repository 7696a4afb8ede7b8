import type { RuleSet } from '../../shared/schemas/rule-sets.ts';
import type { StudyResult } from '../../shared/schemas/study-result.ts';
import { resultFormat } from '../../shared/schemas/study-result.ts';
import type { Study } from '../../shared/schemas/study.ts';
import { reportDevices } from './device-results.ts';
import { listCases } from './findings/operating-cases.ts';
import type { Answered } from './findings/judge.ts';
import { answerQuestions } from './findings/questions.ts';
import type { Screening } from './findings/screening.ts';
import { traceUpstream } from './findings/upstream.ts';
import { reportLines } from './line-results.ts';
import { nodeAt } from './model-parts.ts';
import { reportNodes } from './node-results.ts';
import { listMethodWarnings } from './iec60909.ts';
import { prepareModel } from './prepare-model.ts';
import { reportGrounding, reportIslandGrounding, reportProject } from './project-results.ts';
import type { SolvedCase } from './solve-case.ts';
import { listScenarioWarnings } from './scenario-warnings.ts';
import { makeStateSolvers } from './state-solver.ts';
import type { StateName } from './states.ts';
import { listWarnings } from './warnings.ts';
import type { Arrays } from './work-arrays.ts';
import { newArrays, withWorkArrays } from './work-arrays.ts';

/** A step that is about to be taken: `done` of `total` are behind it. */
export type StudyStep = { key: string; label: string; done: number; total: number };

const steps = [
  { key: 'network', label: 'Reading the network' },
  { key: 'none', label: 'Fault currents of the sources alone' },
  { key: 'before', label: 'Fault currents before the project' },
  { key: 'after', label: 'Fault currents with the project' },
  { key: 'minimum', label: 'Smallest fault currents' },
  { key: 'nodes', label: 'Currents at every node' },
  { key: 'devices', label: 'Duty of every device' },
  { key: 'grounding', label: 'Grounding with and without the utility' },
  { key: 'findings', label: 'Findings' },
  { key: 'finished', label: 'Finished' },
] as const;

/** A result with what the working sheet shows besides: the solved cases and the answers' working; both need a project. */
export type WorkedStudy = {
  result: StudyResult;
  worked: { screening: Screening; answers: readonly Answered[] } | undefined;
};

/**
 * Computes everything that a study reports, from a study that `readStudy` has checked; pure, so that the same study
 * and rule set always give the same result.
 */
export function runStudy(study: Study, ruleSet: RuleSet, onStep?: (step: StudyStep) => void): StudyResult {
  return withWorkArrays((arrays) => workStudy(study, ruleSet, onStep, arrays).result);
}

/** As `runStudy`, and keeps what led there, which lives as long as `arrays` do. */
export function workStudy(
  study: Study,
  ruleSet: RuleSet,
  onStep?: (step: StudyStep) => void,
  arrays: Arrays = newArrays,
): WorkedStudy {
  const begin = (key: (typeof steps)[number]['key']) => {
    const done = steps.findIndex((step) => step.key === key);
    onStep?.({ ...steps[done]!, done, total: steps.length - 1 });
  };

  begin('network');
  const model = prepareModel(study);
  const operating = makeStateSolvers(study, model, arrays);
  const solver = operating.base;
  const { kv } = nodeAt(model, model.nodeIndex.get(study.project?.node ?? study.feeder.nodes[0]!.id)!);
  const solve = (state: StateName): SolvedCase => {
    begin(state);
    return solver.solve(state, kv);
  };
  const none = solve('none');
  const before = solve('before');
  if (!study.project) begin('after');
  // Without a project nothing tells the two apart.
  const after = study.project ? solve('after') : before;
  const states = { none, before, after, minimum: solve('minimum') };

  begin('nodes');
  const nodes = reportNodes(
    study.feeder.nodes,
    solver.solve,
    study.project !== undefined,
    study.minimumFaultOhm ?? 0,
  );

  begin('devices');
  const devices = reportDevices(study, model, operating);

  const { lines, warnings } = reportLines(study);
  const { project } = study;
  const result: StudyResult = {
    format: resultFormat,
    nodes,
    devices,
    ...(lines ? { lines } : {}),
    findings: [],
    warnings: [
      ...listWarnings(study, states),
      ...listScenarioWarnings(operating, kv, project !== undefined),
      ...listMethodWarnings(study),
      ...warnings,
    ],
  };
  let worked: WorkedStudy['worked'];
  if (project) {
    const poi = model.nodeIndex.get(project.node)!;
    begin('grounding');
    const atPoi = nodes[project.node]!;
    result.project = reportProject(project, model, { ...atPoi, after: atPoi.after! });
    result.grounding = {
      connected: reportGrounding(states.after, poi),
      island: reportIslandGrounding(model, poi),
    };
    begin('findings');
    const upstream = traceUpstream(model, states.after.choice, poi);
    const cases = listCases({ operating, model, kv, poi, upstream });
    const screening = { study, project, ruleSet, model, states, poi, upstream, cases };
    const answers = answerQuestions(screening);
    result.findings = answers.map(({ working: _, ...finding }) => finding);
    worked = { screening, answers };
  }
  begin('finished');
  return { result, worked };
}
