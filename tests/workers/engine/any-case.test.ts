import { describe, expect, it } from 'vitest';
import type { Study } from '../../../shared/schemas/study.ts';
import type { CaseChoice } from '../../../workers/engine/case.ts';
import { reportNode } from '../../../workers/engine/node-results.ts';
import { prepareModel } from '../../../workers/engine/prepare-model.ts';
import { solveCase } from '../../../workers/engine/solve-case.ts';
import { choiceOfState } from '../../../workers/engine/states.ts';
import { readCase } from './cases.ts';

/* A choice of what is in and out must give what a study without those elements gives. */

function nodesOf(study: Study, choice: CaseChoice) {
  const model = prepareModel(study);
  const solved = solveCase(model, choice);
  return study.feeder.nodes.map((_, node) => reportNode(solved, node));
}

function without(study: Study, list: keyof Study['feeder'], id: string): Study {
  const kept = (study.feeder[list] as { id: string }[]).filter((element) => element.id !== id);
  return { ...study, feeder: { ...study.feeder, [list]: kept } };
}

describe.each(['random-11', 'random-12', 'random-13', 'random-14'])('A case of %s', (name) => {
  const study = readCase(name);
  const choice = choiceOfState('after', study);
  const everything = Object.values(study.feeder).flat() as { id: string }[];
  const isUnique = (id: string) => everything.filter((element) => element.id === id).length === 1;

  it.each([
    'machines',
    'inverters',
    'sources',
    'groundingBanks',
    'lines',
    'transformers',
    'switches',
  ] as const)('that leaves out one of the %s is the study without it', (list) => {
    for (const { id } of (study.feeder[list] ?? []).filter(({ id: each }) => isUnique(each))) {
      const got = nodesOf(study, { ...choice, out: new Set([id]) });
      expect(got, id).toEqual(nodesOf(without(study, list, id), choice));
    }
  });

  it('that turns a switch over is the study with the switch so', () => {
    for (const { id, closed } of study.feeder.switches ?? []) {
      const switches = study.feeder.switches!.map((link) =>
        link.id === id ? { ...link, closed: !closed } : link,
      );
      const got = nodesOf(study, { ...choice, switches: new Map([[id, !closed]]) });
      expect(got, id).toEqual(nodesOf({ ...study, feeder: { ...study.feeder, switches } }, choice));
    }
  });

  it('leaves the other cases of the same model as they were', () => {
    const model = prepareModel(study);
    const before = reportNode(solveCase(model, choice), 0);
    solveCase(model, { ...choice, out: new Set([study.feeder.lines![0]!.id]), sources: 'out' });
    solveCase(model, { ...choice, opened: [{ branch: 0, end: 'from' }] });
    expect(reportNode(solveCase(model, choice), 0)).toEqual(before);
  });
});
