import type { Study } from '../../shared/schemas/study.ts';
import type { CaseChoice, Model } from './case.ts';
import { allPhases } from './case.ts';
import { DisjointSets } from './graph.ts';
import { phaseSet } from './per-unit.ts';
import { prepareModel } from './prepare-model.ts';
import type { Problem } from './shape.ts';
import { eachElement } from './study-elements.ts';
import { traceTopology } from './topology.ts';

/* That what is joined can be joined. Everything is looked at with the project and all that came with generators in. */

const everything: CaseChoice = {
  sources: 'max',
  prefaultFactor: 1,
  machines: 'all',
  inverters: 'all',
  groundingBanks: 'all',
  project: true,
  companions: true,
};

/** Notes what is wrong with the network as a whole; shape and references must be right. */
export function checkNetwork(study: Study, problems: Problem[]): void {
  const model = prepareModel(study);
  const nodeOf = (id: string) => model.nodes[model.nodeIndex.get(id)!]!;
  checkVoltages(study, nodeOf, problems);
  checkPhases(study, nodeOf, problems);
  checkLateralLoops(study, model, problems);
  checkIslands(study, model, problems);
  // A walk over laterals needs them to be trees, and a phase shift needs what it joins to be three-phase.
  if (problems.length === 0) checkWalk(study, model, problems);
}

type NodeOf = (id: string) => Model['nodes'][number];

function checkVoltages(study: Study, nodeOf: NodeOf, problems: Problem[]): void {
  for (const kind of ['lines', 'switches'] as const) {
    for (const { element, pointer } of eachElement(study, kind)) {
      if ('closed' in element && !element.closed) continue;
      const from = nodeOf(element.from).kv;
      const to = nodeOf(element.to).kv;
      if (Math.abs(from - to) <= 1e-9 * from) continue;
      problems.push({
        pointer,
        got: `${from} kV at one end and ${to} kV at the other`,
        expected: 'one voltage',
      });
    }
  }
}

function checkPhases(study: Study, nodeOf: NodeOf, problems: Problem[]): void {
  const need = (phases: number, node: string, pointer: string) => {
    const there = nodeOf(node).phases;
    if ((phases & ~there) === 0) return;
    const expected = `a node with phases ${lettersOf(phases)}`;
    problems.push({ pointer, got: `${JSON.stringify(node)} with ${lettersOf(there)}`, expected });
  };
  for (const kind of ['sources', 'machines', 'groundingBanks'] as const) {
    for (const { element, pointer } of eachElement(study, kind))
      need(allPhases, element.node, `${pointer}/node`);
  }
  for (const kind of ['inverters', 'loads'] as const) {
    for (const { element, pointer } of eachElement(study, kind)) {
      need(phaseSet(element.phases), element.node, `${pointer}/node`);
    }
  }
  for (const { element, pointer } of eachElement(study, 'transformers')) {
    need(allPhases, element.from, `${pointer}/from`);
    need(allPhases, element.to, `${pointer}/to`);
  }
  for (const { element, pointer } of eachElement(study, 'lines')) {
    need(phaseSet(element.phases), element.from, `${pointer}/from`);
    need(phaseSet(element.phases), element.to, `${pointer}/to`);
  }
}

/** The core counts as one place, so that a lateral between two of its buses closes a loop too. */
function checkLateralLoops(study: Study, model: Model, problems: Problem[]): void {
  const parts = new DisjointSets(model.nodes.length + 1);
  const core = model.nodes.length;
  model.nodes.forEach(({ phases }, index) => {
    if (phases === allPhases) parts.join(index, core);
  });
  for (const kind of ['lines', 'switches'] as const) {
    for (const { element, pointer } of eachElement(study, kind)) {
      if ('closed' in element && !element.closed) continue;
      const from = model.nodeIndex.get(element.from)!;
      const to = model.nodeIndex.get(element.to)!;
      const bothInCore = model.nodes[from]!.phases === allPhases && model.nodes[to]!.phases === allPhases;
      if (bothInCore && ('closed' in element || phaseSet(element.phases) === allPhases)) continue;
      if (parts.join(from, to)) continue;
      problems.push({ pointer, got: 'a loop of laterals', expected: 'laterals without loops' });
    }
  }
}

function checkIslands(study: Study, model: Model, problems: Problem[]): void {
  const islands = new DisjointSets(model.nodes.length);
  for (const { from, to } of model.branches) islands.join(from, to);
  for (const { from, to, closed } of model.switches) if (closed) islands.join(from, to);
  const fed = new Set<number>();
  for (const { max } of model.sources) fed.add(islands.find(max.node));
  for (const { node } of model.machines) fed.add(islands.find(node));
  for (const { element, pointer } of eachElement(study, 'nodes')) {
    const island = islands.find(model.nodeIndex.get(element.id)!);
    if (fed.has(island)) continue;
    fed.add(island);
    problems.push({
      pointer,
      got: 'an island with neither source nor machine',
      expected: 'something that feeds it',
    });
  }
}

function checkWalk(study: Study, model: Model, problems: Problem[]): void {
  const pointers = new Map<string, string>();
  for (const kind of ['lines', 'transformers'] as const) {
    for (const { element, pointer } of eachElement(study, kind)) pointers.set(element.id, pointer);
  }
  const { busOf, clockHours, laterals, coreBranches } = traceTopology(model, everything);
  for (const index of coreBranches) {
    const branch = model.branches[index]!;
    const lag = clockHours[busOf[branch.to]!]! - clockHours[busOf[branch.from]!]!;
    if ((lag - branch.clockHour) % 12 === 0) continue;
    const got = `a lag of ${branch.clockHour} × 30° where the rest of its loop makes ${((lag % 12) + 12) % 12} × 30°`;
    problems.push({
      pointer: pointers.get(branch.id)!,
      got,
      expected: 'phase shifts that agree around the loop',
    });
  }
  const spotPointers = new Map<number, string>();
  for (const { element, pointer } of eachElement(study, 'nodes')) {
    const spot = laterals.spotOf[model.nodeIndex.get(element.id)!]!;
    if (spot !== -1 && !spotPointers.has(spot)) spotPointers.set(spot, pointer);
  }
  laterals.phases.forEach((phases, spot) => {
    const parent = laterals.parent[spot]!;
    const branch = model.branches[laterals.branch[spot]!];
    const given = branch?.phases ?? (parent === -1 ? allPhases : laterals.phases[parent]!);
    if ((phases & ~given) === 0) return;
    const pointer = `${spotPointers.get(spot)!}/phases`;
    problems.push({
      pointer,
      got: lettersOf(phases),
      expected: `phases that its supply has: ${lettersOf(given)}`,
    });
  });
}

function lettersOf(phases: number): string {
  return ['A', 'B', 'C'].filter((_, phase) => phases & (1 << phase)).join('') || 'none';
}
