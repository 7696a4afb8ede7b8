import type { CaseChoice, Model } from './case.ts';
import { isClosed } from './case.ts';
import { DisjointSets } from './graph.ts';
import { companionFlag, ofProjectFlag, wiringOf } from './wiring.ts';
import type { Arrays } from './work-arrays.ts';

/* Nodes that closed switches make one, and the edges between such groups. */

export type JoinedNodes = {
  /** By node: the group, named by one of its nodes; -1 for absent nodes. */
  readonly groupOf: Int32Array;
  /** By edge its two groups: first the model's branches, then closed switches between groups; -1 where there is no edge. */
  readonly from: Int32Array;
  readonly to: Int32Array;
};

/** Joins what closed switches join; between nodes of unlike phases a switch is an edge without length. */
export function joinSwitchedNodes(model: Model, choice: CaseChoice, arrays: Arrays): JoinedNodes {
  const { nodePhases } = wiringOf(model);
  const groupOf = listPresentNodes(model, choice, arrays);
  const links: [number, number][] = [];
  const closed = model.switches.filter(
    (link) => groupOf[link.from] !== -1 && groupOf[link.to] !== -1 && isClosed(choice, link),
  );
  if (closed.length > 0) {
    const groups = new DisjointSets(groupOf.length);
    const isLike = ({ from, to }: { from: number; to: number }) => nodePhases[from] === nodePhases[to];
    for (const link of closed) if (isLike(link)) groups.join(link.from, link.to);
    for (let node = 0; node < groupOf.length; node++) {
      if (groupOf[node] !== -1) groupOf[node] = groups.find(node);
    }
    for (const link of closed) if (!isLike(link)) links.push([groupOf[link.from]!, groupOf[link.to]!]);
  }
  return { groupOf, ...listEdges(model, choice, groupOf, links, arrays) };
}

/** By node: the node itself, -1 where it is absent. */
export function listPresentNodes(model: Model, choice: CaseChoice, arrays: Arrays): Int32Array {
  const { nodeFlags } = wiringOf(model);
  const groupOf = arrays.integers(nodeFlags.length);
  const absent = absentFlags(choice);
  for (let node = 0; node < groupOf.length; node++) groupOf[node] = nodeFlags[node]! & absent ? -1 : node;
  for (const id of choice.out ?? []) {
    const node = model.nodeIndex.get(id);
    if (node !== undefined) groupOf[node] = -1;
  }
  return groupOf;
}

function absentFlags(choice: CaseChoice): number {
  return (choice.project ? 0 : ofProjectFlag) | (choice.companions ? 0 : companionFlag);
}

/** The branches that are in service with both ends, then `links`, by the groups of their ends; -1 where there is no edge. */
export function listEdges(
  model: Model,
  choice: CaseChoice,
  groupOf: Int32Array,
  links: readonly [number, number][],
  arrays: Arrays,
) {
  const wiring = wiringOf(model);
  const branchCount = wiring.from.length;
  const from = arrays.integers(branchCount + links.length);
  const to = arrays.integers(branchCount + links.length);
  const absent = absentFlags(choice);
  for (let edge = 0; edge < branchCount; edge++) {
    const u = groupOf[wiring.from[edge]!]!;
    const v = groupOf[wiring.to[edge]!]!;
    const there = u !== -1 && v !== -1 && !(wiring.branchFlags[edge]! & absent);
    from[edge] = there ? u : -1;
    to[edge] = there ? v : -1;
  }
  links.forEach(([u, v], index) => {
    from[branchCount + index] = u;
    to[branchCount + index] = v;
  });
  const takeOut = (edge: number) => (from[edge] = to[edge] = -1);
  for (const { branch } of choice.opened ?? []) takeOut(branch);
  for (const id of choice.out ?? []) {
    const branch = model.branchIndex.get(id);
    if (branch !== undefined) takeOut(branch);
  }
  return { from, to };
}
