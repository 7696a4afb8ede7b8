import type { CaseChoice, Model } from './case.ts';
import { isClosed, isPresent } from './case.ts';
import { DisjointSets } from './graph.ts';
import type { Wiring } from './wiring.ts';
import { companionFlag, ofProjectFlag } from './wiring.ts';

/* Nodes that closed switches make one, and the edges between such groups. */

export type JoinedNodes = {
  /** By node: the group, named by one of its nodes; -1 for absent nodes. */
  readonly groupOf: Int32Array;
  /** By edge its two groups: first the model's branches, then closed switches between groups; -1 where there is no edge. */
  readonly from: Int32Array;
  readonly to: Int32Array;
};

/** Joins what closed switches join; between nodes of unlike phases a switch is an edge without length. */
export function joinSwitchedNodes(model: Model, wiring: Wiring, choice: CaseChoice): JoinedNodes {
  const groupOf = listPresentNodes(model, wiring, choice);
  const links: [number, number][] = [];
  const closed = model.switches.filter(
    (link) => groupOf[link.from] !== -1 && groupOf[link.to] !== -1 && isClosed(choice, link),
  );
  if (closed.length > 0) {
    const groups = new DisjointSets(model.nodes.length);
    const isLike = ({ from, to }: { from: number; to: number }) =>
      model.nodes[from]!.phases === model.nodes[to]!.phases;
    for (const link of closed) if (isLike(link)) groups.join(link.from, link.to);
    for (let node = 0; node < groupOf.length; node++) {
      if (groupOf[node] !== -1) groupOf[node] = groups.find(node);
    }
    for (const link of closed) if (!isLike(link)) links.push([groupOf[link.from]!, groupOf[link.to]!]);
  }
  return { groupOf, ...listEdges(model, wiring, choice, groupOf, links) };
}

function listPresentNodes(model: Model, { nodeFlags }: Wiring, choice: CaseChoice): Int32Array {
  const groupOf = new Int32Array(nodeFlags.length);
  const absent = absentFlags(choice);
  for (let node = 0; node < groupOf.length; node++) groupOf[node] = nodeFlags[node]! & absent ? -1 : node;
  if (choice.out) {
    for (let node = 0; node < groupOf.length; node++) {
      if (choice.out.has(model.nodes[node]!.id)) groupOf[node] = -1;
    }
  }
  return groupOf;
}

function absentFlags(choice: CaseChoice): number {
  return (choice.project ? 0 : ofProjectFlag) | (choice.companions ? 0 : companionFlag);
}

function listEdges(
  model: Model,
  wiring: Wiring,
  choice: CaseChoice,
  groupOf: Int32Array,
  links: readonly [number, number][],
) {
  const branchCount = wiring.from.length;
  const from = new Int32Array(branchCount + links.length);
  const to = new Int32Array(branchCount + links.length);
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
  if (choice.out) {
    for (let edge = 0; edge < branchCount; edge++) {
      if (!isPresent(choice, model.branches[edge]!)) takeOut(edge);
    }
  }
  return { from, to };
}
