import { describe, expect, test } from 'vitest';
import { makeDemoModels, type DemoModel } from '../../../db/seeds/demo/feeders.ts';
import { proFormaRuleSet } from '../../../shared/rules/pro-forma.ts';
import { studyFormat, type Project } from '../../../shared/schemas/study.ts';
import { readStudy } from '../../../workers/engine/read-study.ts';
import { workStudy } from '../../../workers/engine/run-study.ts';
import { makeSheet } from '../../../workers/engine/sheet/make-sheet.ts';
import { listFaults } from '../../support/recompute-step.ts';

/* Every step of the working sheets of three kinds of projects, on every network of the demo, from its printed inputs. */

type Wanted = { name: string; phases: string; project: (node: string) => Project };

const machine: Wanted = {
  name: 'a machine behind an earthed star',
  phases: 'ABC',
  project: (node) => ({
    id: 'project',
    node,
    nodes: [{ id: 'site', kv: 0.48, phases: 'ABC' }],
    transformers: [
      {
        ...{ id: 'step-up', from: node, to: 'site', kva: 1000, connection: 'YNd1', impedancePercent: 5.75 },
        ...{ xr: 7, neutralFrom: { r: 0, x: 12 } },
      },
    ],
    machines: [
      {
        ...{ id: 'genset', node: 'site', kind: 'synchronous', kva: 800, rPu: 0.01, xSubtransientPu: 0.16 },
        ...{ x2Pu: 0.18, neutral: 'ungrounded' },
      },
    ],
  }),
};
const inverter =
  (phases: string, kva: number) =>
  (node: string): Project => ({
    id: 'project',
    node,
    inverters: [{ id: 'unit', node, phases, kva, faultCurrentPu: 1.2, faultAngleDeg: -70 }],
  });
const wanted: Wanted[] = [
  machine,
  { name: 'a three-phase inverter', phases: 'ABC', project: inverter('ABC', 500) },
  { name: 'a one-phase inverter on a lateral', phases: 'B', project: inverter('B', 25) },
];

/** Of nodes with these phases the one in the middle of the list: neither the bus nor an end. */
function chooseNode({ content }: DemoModel, phases: string): string | undefined {
  const nodes = content.feeder.nodes.filter((node) => node.kv > 1 && node.kv < 30 && node.phases === phases);
  return nodes[Math.floor(nodes.length / 2)]?.id;
}

describe.each(makeDemoModels())('A working sheet on $code', (model) => {
  test.each(wanted)('of $name gives every result from the numbers that it prints', ({ phases, project }) => {
    const node = chooseNode(model, phases);
    if (node === undefined) throw new Error(`${model.code}: got no node of phases ${phases}`);
    const study = { format: studyFormat, ...model.content, project: project(node) };
    const read = readStudy(JSON.stringify(study));
    if ('problems' in read) throw new Error(JSON.stringify(read.problems));
    const { result, worked } = workStudy(read.study, proFormaRuleSet);
    const sheet = makeSheet(result, worked!, {});
    const lists = [
      ...sheet.networks.map(({ steps }) => [...sheet.basis, ...sheet.elements, ...steps]),
      ...sheet.faults.map(({ steps }) => steps),
      ...sheet.findings.map(({ working }) => working),
      sheet.coordination?.working ?? [],
    ];
    expect(lists.flatMap(listFaults)).toEqual([]);
    expect(lists.flat().filter(({ formula }) => formula !== undefined).length).toBeGreaterThan(30);
    for (const { finding, working } of sheet.findings) {
      if (finding.value === null) continue;
      const last = working.findLast(({ formula }) => formula !== undefined)?.result.value;
      expect(last, `${finding.id} of ${finding.element}`).toBeCloseTo(finding.value, 9);
    }
    expect(sheet.path.at(-1)!.node).toBe(node);
  });
});
