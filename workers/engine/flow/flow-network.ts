import type { Source, Study } from '../../../shared/schemas/study.ts';
import type { CaseChoice, Model } from '../case.ts';
import { isClosed, isInService, isPresent } from '../case.ts';
import type { Graph } from '../graph.ts';
import { DisjointSets, buildGraph } from '../graph.ts';
import { branchAt, nodeAt } from '../model-parts.ts';
import { listEdges as listInService, listPresentNodes } from '../joined-nodes.ts';
import { eachElement } from '../study-elements.ts';
import { wiringOf } from '../wiring.ts';
import { newArrays } from '../work-arrays.ts';

/*
 * What a load flow walks over: trees that start at the sources. A place is what a node is in such a tree; places are
 * numbered from the sources outwards, so that a place's parent has a smaller number than it has. Branches that close loops
 * are cut at their `to` end: what is left of one hangs from its other end as a place of its own, and a current that makes
 * both sides of the cut agree stands for the rest (the breakpoint method of D. Shirmohammadi and others, IEEE Transactions
 * on Power Systems 3(2), 1988; value from memory).
 */

export type Cut = {
  /** What is left hanging, and the place that it would join. */
  readonly place: number;
  readonly target: number;
  readonly phases: number;
  /** Of the branch or switch that is cut. */
  readonly id: string;
};

export type FlowNetwork = {
  readonly model: Model;
  readonly choice: CaseChoice;
  /** By node of the model; -1 where no source feeds it. */
  readonly placeOf: Int32Array;
  /** By place: the node, the place nearer the source (-1 at it), the branch between (-1 for a closed switch). */
  readonly nodeOf: Int32Array;
  readonly parent: Int32Array;
  readonly branch: Int32Array;
  /** By place: phases that reach it. */
  readonly phases: Uint8Array;
  readonly roots: readonly Root[];
  readonly cuts: readonly Cut[];
};

/** Where a tree starts, and the angle of the voltage there, in steps of 30° behind the first source of its island. */
export type Root = { readonly place: number; readonly source: Source; readonly clockHours: number };

/** `branches` are indices in the model, -1 for closed switches, which come last. */
type Edges = {
  from: number[];
  to: number[];
  branchCount: number;
  branches: number[];
  switchIds: string[];
};

/** Lays out the trees of one case; branches and nodes that are out in the case are left out. */
export function traceFlowNetwork(study: Study, model: Model, choice: CaseChoice): FlowNetwork {
  const edges = listEdges(model, choice);
  const graph = buildGraph(wiringOf(model).nodeFlags.length, edges.from, edges.to);
  const sources = listSources(study, model, choice, edges);
  const count = wiringOf(model).nodeFlags.length;
  const placeOf = new Int32Array(count).fill(-1);
  const nodeOf: number[] = [];
  const parent: number[] = [];
  const branch: number[] = [];
  const phases: number[] = [];
  const isUsed = new Uint8Array(edges.from.length);
  const put = (node: number, above: number, edge: number) => {
    placeOf[node] = nodeOf.length;
    nodeOf.push(node);
    parent.push(above);
    branch.push(edge === -1 ? -1 : edges.branches[edge]!);
    phases.push(
      above === -1 ? wiringOf(model).nodePhases[node]! : phasesAlong(model, edges, edge, phases[above]!),
    );
  };
  for (const { node } of sources) put(node, -1, -1);
  for (let head = 0; head < nodeOf.length; head++) {
    const u = nodeOf[head]!;
    for (let p = graph.start[u]!; p < graph.start[u + 1]!; p++) {
      const v = graph.neighbour[p]!;
      if (placeOf[v] !== -1) continue;
      isUsed[graph.edge[p]!] = 1;
      put(v, head, graph.edge[p]!);
    }
  }
  const cuts: Cut[] = [];
  edges.from.forEach((u, edge) => {
    const v = edges.to[edge]!;
    if (isUsed[edge] || u === v || placeOf[u] === -1 || placeOf[v] === -1) return;
    const along = phasesAlong(model, edges, edge, phases[placeOf[u]!]!) & phases[placeOf[v]!]!;
    cuts.push({ place: nodeOf.length, target: placeOf[v]!, phases: along, id: nameOf(model, edges, edge) });
    nodeOf.push(v);
    parent.push(placeOf[u]!);
    branch.push(edges.branches[edge]!);
    phases.push(along);
  });
  const hours = sources.length > 1 ? addUpHours(model, edges, graph) : undefined;
  return {
    model,
    choice,
    placeOf,
    nodeOf: Int32Array.from(nodeOf),
    parent: Int32Array.from(parent),
    branch: Int32Array.from(branch),
    phases: Uint8Array.from(phases),
    roots: sources.map(({ node, source }) => ({
      place: placeOf[node]!,
      source,
      clockHours: hours ? hours[node]! : 0,
    })),
    cuts,
  };
}

function listEdges(model: Model, choice: CaseChoice): Edges {
  const edges: Edges = { from: [], to: [], branchCount: 0, branches: [], switchIds: [] };
  const push = (from: number, to: number, branch: number) => {
    edges.from.push(from);
    edges.to.push(to);
    edges.branches.push(branch);
  };
  const inService = listInService(model, choice, listPresentNodes(model, choice, newArrays), [], newArrays);
  inService.from.forEach((from, index) => {
    if (from !== -1) push(from, inService.to[index]!, index);
  });
  edges.branchCount = edges.from.length;
  // A switch between places that other switches join already carries what nobody can tell, and changes no voltage.
  const joined = new DisjointSets(wiringOf(model).nodeFlags.length);
  for (const link of model.switches) {
    if (!isClosed(choice, link) || !isInService(model, choice, link) || !joined.join(link.from, link.to))
      continue;
    push(link.from, link.to, -1);
    edges.switchIds.push(link.id);
  }
  return edges;
}

function nameOf(model: Model, { branches, branchCount, switchIds }: Edges, edge: number): string {
  const branch = branches[edge]!;
  return branch === -1 ? switchIds[edge - branchCount]! : branchAt(model, branch).id;
}

/** One source of those that closed switches join; the first of each place holds the voltage. */
function listSources(study: Study, model: Model, choice: CaseChoice, edges: Edges) {
  const joined = new DisjointSets(wiringOf(model).nodeFlags.length);
  for (let edge = edges.branchCount; edge < edges.from.length; edge++)
    joined.join(edges.from[edge]!, edges.to[edge]!);
  const taken = new Set<number>();
  const sources: { node: number; source: Source }[] = [];
  let index = 0;
  for (const { element } of eachElement(study, 'sources')) {
    const { max } = model.sources[index++]!;
    const group = joined.find(max.node);
    if (!isPresent(choice, max) || !isPresent(choice, nodeAt(model, max.node)) || taken.has(group)) continue;
    taken.add(group);
    sources.push({ node: max.node, source: element as Source });
  }
  return sources;
}

function phasesAlong(model: Model, { branches, from, to }: Edges, edge: number, given: number): number {
  const index = branches[edge]!;
  const { nodePhases, selfRe } = wiringOf(model);
  const nodes = nodePhases[from[edge]!]! & nodePhases[to[edge]!]!;
  // Where all lines have all phases there are none to look up.
  const isAll = index === -1 || selfRe.length === 0;
  return isAll ? given & nodes : given & nodes & branchAt(model, index).phases;
}

/** By node: its lag behind the first of its island. */
function addUpHours(model: Model, { from, branches }: Edges, graph: Graph): Int32Array {
  const hours = new Int32Array(wiringOf(model).nodeFlags.length);
  const isSeen = new Uint8Array(hours.length);
  for (let first = 0; first < hours.length; first++) {
    if (isSeen[first]) continue;
    isSeen[first] = 1;
    const queue = [first];
    for (let head = 0; head < queue.length; head++) {
      const u = queue[head]!;
      for (let p = graph.start[u]!; p < graph.start[u + 1]!; p++) {
        const v = graph.neighbour[p]!;
        if (isSeen[v]) continue;
        isSeen[v] = 1;
        const edge = graph.edge[p]!;
        const lag = branches[edge] === -1 ? 0 : wiringOf(model).clockHours[branches[edge]!]!;
        hours[v] = hours[u]! + (from[edge] === u ? lag : -lag);
        queue.push(v);
      }
    }
  }
  return hours;
}
