import { proFormaRuleSet } from '../../shared/rules/pro-forma.ts';
import type { StudyResult } from '../../shared/schemas/study-result.ts';
import type { Study } from '../../shared/schemas/study.ts';
import { prepareModel } from '../engine/prepare-model.ts';
import { checkStudy } from '../engine/read-study.ts';
import { runStudy } from '../engine/run-study.ts';
import { shortestMs } from './measure.ts';
import type { NetworkKind } from './networks.ts';
import { makeNetwork } from './networks.ts';

/** Times a whole study, object in and object out, in ns a node, beside writing its result as JSON. */
export function measureWholeStudy(kind: NetworkKind, count: number) {
  const { project: _, ...feederAlone } = makeNetwork(kind, count);
  const study: Study = feederAlone;
  const withProject = makeNetwork(kind, count);
  const perNode = (milliseconds: number) => Math.round((milliseconds / count) * 1e6);
  const runs = 3;
  const check = shortestMs(() => checkStudy(study), runs);
  const prepare = shortestMs(() => prepareModel(study), runs);
  // A small study needs more runs until its code is compiled, which counts as processor time of the run.
  const { result, whole, steps } = timeStudy(study, count < 100_000 ? 15 : 8);
  const write = shortestMs(() => JSON.stringify(result), runs);
  const screened = shortestMs(() => runStudy(withProject, proFormaRuleSet), 2);
  return {
    nsPerNode: {
      check: perNode(check),
      prepare: perNode(prepare),
      devices: perNode(steps.get('devices') ?? 0),
      wholeStudy: perNode(whole),
      jsonStringify: perNode(write),
      withProjectAndFindings: perNode(screened),
    },
    timesJsonStringify: Math.round((whole / write) * 100) / 100,
  };
}

/** The shortest of several runs, of the whole and of each of its steps, in ms of processor time. */
function timeStudy(study: Study, runs: number) {
  const steps = new Map<string, number>();
  const keepShortest = (step: string, since: NodeJS.CpuUsage) => {
    const { user, system } = process.cpuUsage(since);
    steps.set(step, Math.min(steps.get(step) ?? Infinity, (user + system) / 1000));
  };
  let result: StudyResult | undefined;
  const whole = shortestMs(() => {
    let step = '';
    let mark = process.cpuUsage();
    result = runStudy(study, proFormaRuleSet, ({ key }) => {
      if (step !== '') keepShortest(step, mark);
      step = key;
      mark = process.cpuUsage();
    });
  }, runs);
  return { result, whole, steps };
}
