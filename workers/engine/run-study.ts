import type { RuleSet } from '../../shared/schemas/rule-sets.ts';
import type { DeviceResult, NodeResult, StudyResult } from '../../shared/schemas/study-result.ts';
import { resultFormat } from '../../shared/schemas/study-result.ts';
import type { Study } from '../../shared/schemas/study.ts';
import type { Model } from './case.ts';
import { findDeviceDuty } from './devices.ts';
import { answerQuestions } from './findings/questions.ts';
import { traceUpstream } from './findings/upstream.ts';
import { reportMinimum, reportNode } from './node-results.ts';
import { prepareModel } from './prepare-model.ts';
import { reportGrounding, reportProject, solveIsland } from './project-results.ts';
import type { SolvedCase } from './solve-case.ts';
import { solveCase } from './solve-case.ts';
import type { StateName } from './states.ts';
import { choiceOfState } from './states.ts';
import { listWarnings } from './warnings.ts';

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

/**
 * Computes everything that a study reports, from a study that `readStudy` has checked; pure, so that the same study
 * and rule set always give the same result.
 */
export function runStudy(study: Study, ruleSet: RuleSet, onStep?: (step: StudyStep) => void): StudyResult {
  const begin = (key: (typeof steps)[number]['key']) => {
    const done = steps.findIndex((step) => step.key === key);
    onStep?.({ ...steps[done]!, done, total: steps.length - 1 });
  };

  begin('network');
  const model = prepareModel(study);
  const solve = (state: StateName): SolvedCase => {
    begin(state);
    return solveCase(model, choiceOfState(state, study));
  };
  const states = {
    none: solve('none'),
    before: solve('before'),
    after: solve('after'),
    minimum: solve('minimum'),
  };

  begin('nodes');
  const nodes = reportNodes(study, model, states);

  begin('devices');
  const devices = reportDevices(study, states);

  const { project } = study;
  const result: StudyResult = {
    format: resultFormat,
    nodes,
    devices,
    findings: [],
    warnings: listWarnings(study, states),
  };
  if (project) {
    const poi = model.nodeIndex.get(project.node)!;
    begin('grounding');
    const { none, before, after } = nodes[project.node]!;
    result.project = reportProject(project, model, { none, before, after: after! });
    result.grounding = {
      connected: reportGrounding(states.after, poi),
      island: reportGrounding(solveIsland(model), poi),
    };
    begin('findings');
    const upstream = traceUpstream(model, states.after.choice, poi);
    result.findings = answerQuestions({ study, project, ruleSet, model, states, poi, upstream });
  }
  begin('finished');
  return result;
}

function reportNodes(
  study: Study,
  model: Model,
  states: Record<StateName, SolvedCase>,
): Record<string, NodeResult> {
  const report = (node: number): NodeResult => ({
    none: reportNode(states.none, node),
    before: reportNode(states.before, node),
    ...(study.project ? { after: reportNode(states.after, node) } : {}),
    minimum: reportMinimum(states.minimum, node, study.minimumFaultOhm ?? 0),
  });
  return Object.fromEntries(study.feeder.nodes.map(({ id }) => [id, report(model.nodeIndex.get(id)!)]));
}

function reportDevices(study: Study, states: Record<StateName, SolvedCase>): Record<string, DeviceResult> {
  return Object.fromEntries(
    (study.feeder.devices ?? []).map((device) => [
      device.id,
      {
        before: findDeviceDuty(states.before, device),
        ...(study.project ? { after: findDeviceDuty(states.after, device) } : {}),
      },
    ]),
  );
}
