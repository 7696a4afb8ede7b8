import { proFormaRuleSet } from '../../shared/rules/pro-forma.ts';
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
  let result = runStudy(study, proFormaRuleSet);
  const whole = shortestMs(() => (result = runStudy(study, proFormaRuleSet)), runs);
  const steps = timeSteps(study);
  const write = shortestMs(() => JSON.stringify(result), runs);
  const screened = shortestMs(() => runStudy(withProject, proFormaRuleSet), runs);
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

/** The shortest of three runs of each step of a study, in ms of processor time. */
function timeSteps(study: Study): Map<string, number> {
  const shortest = new Map<string, number>();
  for (let run = 0; run < 3; run++) {
    let step = '';
    let mark = process.cpuUsage();
    runStudy(study, proFormaRuleSet, ({ key }) => {
      const { user, system } = process.cpuUsage(mark);
      if (step !== '') shortest.set(step, Math.min(shortest.get(step) ?? Infinity, (user + system) / 1000));
      step = key;
      mark = process.cpuUsage();
    });
  }
  return shortest;
}
