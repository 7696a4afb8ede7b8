import type { CaseChoice, Model } from './case.ts';
import { allPhases, isPresent } from './case.ts';
import type { Graph } from './graph.ts';
import { DisjointSets, buildGraph } from './graph.ts';

/* What is joined to what in one case: buses, the branches of the core between them, and the laterals. */

export type Topology = {
  /** By node; -1 on a lateral or absent. */
  readonly busOf: Int32Array;
  readonly busCount: number;
  /** Indices of the model's branches that the core has. */
  readonly coreBranches: readonly number[];
  /** The core: its edges count along `coreBranches`. */
  readonly core: Graph;
  /** By bus: by how many times 30° it lags the first bus of its island. */
  readonly clockHours: Int32Array;
  /** By bus: a number that all buses of one island share. */
  readonly islandOf: Int32Array;
  readonly laterals: Laterals;
};

/** A spot is what a bus is in the core. Spots are listed from the taps outwards. */
export type Laterals = {
  /** By node; -1 in the core, absent or cut off. */
  readonly spotOf: Int32Array;
  /** The spot nearer the tap, -1 where that is the tap itself. */
  readonly parent: Int32Array;
  /** The branch between, -1 for a closed switch. */
  readonly branch: Int32Array;
  readonly tap: Int32Array;
  readonly phases: Uint8Array;
};

/** Finds what is joined to what; time and memory are linear in the model. */
export function traceTopology(model: Model, choice: CaseChoice): Topology {
  const groupOf = mergeSwitchedNodes(model, choice);
  const { busOf, busCount } = numberBuses(model, groupOf);
  const coreBranches: number[] = [];
  const lateralBranches: number[] = [];
  model.branches.forEach((branch, index) => {
    if (!isPresent(choice, branch) || choice.opened?.branch === index) return;
    if (busOf[branch.from] === -1 || busOf[branch.to] === -1) lateralBranches.push(index);
    else coreBranches.push(index);
  });
  const core = buildGraph(
    busCount,
    coreBranches.map((index) => busOf[model.branches[index]!.from]!),
    coreBranches.map((index) => busOf[model.branches[index]!.to]!),
  );
  return {
    busOf,
    busCount,
    coreBranches,
    core,
    ...walkIslands(model, coreBranches, core, busOf),
    laterals: traceLaterals(model, choice, groupOf, busOf, lateralBranches),
  };
}

/** By node the group of nodes that closed switches make one, -1 for absent nodes. */
function mergeSwitchedNodes(model: Model, choice: CaseChoice): Int32Array {
  const { nodes, switches } = model;
  const groups = new DisjointSets(nodes.length);
  for (const link of switches) {
    // Between nodes of unlike phases a switch is a lateral without length.
    const [from, to] = [nodes[link.from]!, nodes[link.to]!];
    if (!isClosed(link, choice) || !isPresent(choice, from) || !isPresent(choice, to)) continue;
    if (from.phases === to.phases) groups.join(link.from, link.to);
  }
  return Int32Array.from(nodes, (node, index) => (isPresent(choice, node) ? groups.find(index) : -1));
}

function isClosed(link: Model['switches'][number], choice: CaseChoice): boolean {
  return link.closed && isPresent(choice, link);
}

function numberBuses(model: Model, groupOf: Int32Array) {
  const busOfGroup = new Int32Array(groupOf.length).fill(-1);
  const busOf = new Int32Array(groupOf.length).fill(-1);
  let busCount = 0;
  model.nodes.forEach((node, index) => {
    const group = groupOf[index]!;
    if (group === -1 || node.phases !== allPhases) return;
    if (busOfGroup[group] === -1) busOfGroup[group] = busCount++;
    busOf[index] = busOfGroup[group]!;
  });
  return { busOf, busCount };
}

function walkIslands(model: Model, coreBranches: readonly number[], core: Graph, busOf: Int32Array) {
  const busCount = core.start.length - 1;
  const clockHours = new Int32Array(busCount);
  const islandOf = new Int32Array(busCount).fill(-1);
  const queue = new Int32Array(busCount);
  for (let first = 0; first < busCount; first++) {
    if (islandOf[first] !== -1) continue;
    islandOf[first] = first;
    queue[0] = first;
    for (let head = 0, tail = 1; head < tail; head++) {
      const u = queue[head]!;
      for (let p = core.start[u]!; p < core.start[u + 1]!; p++) {
        const v = core.neighbour[p]!;
        if (islandOf[v] !== -1) continue;
        const branch = model.branches[coreBranches[core.edge[p]!]!]!;
        islandOf[v] = first;
        clockHours[v] = clockHours[u]! + (busOf[branch.from] === u ? branch.clockHour : -branch.clockHour);
        queue[tail++] = v;
      }
    }
  }
  return { clockHours, islandOf };
}

function traceLaterals(
  model: Model,
  choice: CaseChoice,
  groupOf: Int32Array,
  busOf: Int32Array,
  lateralBranches: readonly number[],
): Laterals {
  const { nodes, switches, branches } = model;
  const from: number[] = [];
  const to: number[] = [];
  const branchOfEdge: number[] = [];
  const addEdge = (u: number, v: number, branch: number) => {
    if (groupOf[u] === -1 || groupOf[v] === -1) return;
    from.push(groupOf[u]!);
    to.push(groupOf[v]!);
    branchOfEdge.push(branch);
  };
  for (const index of lateralBranches) addEdge(branches[index]!.from, branches[index]!.to, index);
  for (const link of switches) if (isClosed(link, choice)) addEdge(link.from, link.to, -1);
  const graph = buildGraph(nodes.length, from, to);

  const spotOfGroup = new Int32Array(nodes.length).fill(-1);
  const groups: number[] = [];
  const parent: number[] = [];
  const branch: number[] = [];
  const tap: number[] = [];
  const visit = (group: number, parentSpot: number, bus: number) => {
    for (let p = graph.start[group]!; p < graph.start[group + 1]!; p++) {
      const next = graph.neighbour[p]!;
      if (busOf[next] !== -1 || spotOfGroup[next] !== -1) continue;
      spotOfGroup[next] = groups.length;
      groups.push(next);
      parent.push(parentSpot);
      branch.push(branchOfEdge[graph.edge[p]!]!);
      tap.push(bus);
    }
  };
  // A group is named by one of its nodes, so its bus and phases are that node's.
  for (let node = 0; node < nodes.length; node++) {
    if (groupOf[node] === node && busOf[node] !== -1) visit(node, -1, busOf[node]!);
  }
  for (let spot = 0; spot < groups.length; spot++) visit(groups[spot]!, spot, tap[spot]!);
  return {
    spotOf: Int32Array.from(groupOf, (group) => (group === -1 ? -1 : spotOfGroup[group]!)),
    parent: Int32Array.from(parent),
    branch: Int32Array.from(branch),
    tap: Int32Array.from(tap),
    phases: Uint8Array.from(groups, (group) => nodes[group]!.phases),
  };
}
