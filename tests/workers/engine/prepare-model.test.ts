import { describe, expect, it } from 'vitest';
import { proFormaRuleSet } from '../../../shared/rules/pro-forma.ts';
import { branchAt, nodeAt } from '../../../workers/engine/model-parts.ts';
import { prepareModel } from '../../../workers/engine/prepare-model.ts';
import { runStudy } from '../../../workers/engine/run-study.ts';
import { solveCase } from '../../../workers/engine/solve-case.ts';
import { choiceOfState } from '../../../workers/engine/states.ts';
import { wiringOf } from '../../../workers/engine/wiring.ts';
import { readCase } from './cases.ts';

const names = ['random-11', 'random-12', 'marrow-lane', 'thirteen-node'];

describe.each(names)('The model of %s', (name) => {
  const study = readCase(name);

  it('has the same nodes and branches one by one as in its lists', () => {
    const [inParts, inLists] = [prepareModel(study), prepareModel(study)];
    inLists.nodes.forEach((node, index) => expect(nodeAt(inParts, index)).toEqual(node));
    inLists.branches.forEach((branch, index) => expect(branchAt(inParts, index)).toEqual(branch));
    expect(inLists.branches.length).toBe(wiringOf(inLists).from.length);
    for (const [index, { id }] of inLists.branches.entries()) expect(inLists.branchIndex.get(id)).toBe(index);
    for (const [index, { id }] of inLists.nodes.entries()) expect(inLists.nodeIndex.get(id)).toBe(index);
  });

  it('is laid out from the study as it is from its lists', () => {
    const model = prepareModel(study);
    expect(wiringOf({ ...model })).toEqual(wiringOf(model));
  });
});

describe('A study that was checked', () => {
  it('is solved as it is, where a list of it has been put in another’s place since', () => {
    const study = readCase('random-11');
    const fresh = structuredClone(study);
    for (const each of [study, fresh]) each.feeder.lines = each.feeder.lines!.toReversed();
    for (const each of [study, fresh]) each.feeder.nodes = each.feeder.nodes.toReversed();
    expect(runStudy(study, proFormaRuleSet)).toEqual(runStudy(fresh, proFormaRuleSet));
  });

  it('is solved as it is, where a list of it has grown since', () => {
    const study = readCase('random-11');
    const [first] = study.feeder.lines!;
    const beside = { ...first!, id: 'beside the first' };
    study.feeder.lines!.push(beside);
    const solve = (given: typeof study) => {
      const model = prepareModel(given);
      return [...solveCase(model, choiceOfState('before', given)).networks.positive.z.im];
    };
    expect(solve(study)).toEqual(solve(structuredClone(study)));
  });
});
