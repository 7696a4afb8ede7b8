import type { CaseChoice, Model } from './case.ts';
import type { ComplexArray } from './complex.ts';
import { complexArray } from './complex.ts';
import type { JoinedNodes } from './joined-nodes.ts';
import { joinSwitchedNodes } from './joined-nodes.ts';
import type { Mesh } from './mesh.ts';
import { traceMesh, withOtherImpedances } from './mesh.ts';
import type { TakenOff } from './trees.ts';
import { takeTreesOff } from './trees.ts';
import type { Wiring } from './wiring.ts';
import { companionFlag, ofProjectFlag, wiringOf } from './wiring.ts';
import type { Arrays } from './work-arrays.ts';
import { withWorkArrays } from './work-arrays.ts';

/* What is joined to what in one case: buses, the branches of the core between them, and the laterals. */

export type Topology = {
  /** By node; -1 on a lateral or absent. The mesh has the first numbers, and a bus's parent a smaller one than it has. */
  readonly busOf: Int32Array;
  readonly busCount: number;
  /** Indices of the model's branches that the core has. */
  readonly coreBranches: Int32Array;
  readonly meshCount: number;
  readonly mesh: Mesh;
  /** By bus: the next bus towards the mesh, and the branch there; -1 in the mesh. */
  readonly parent: Int32Array;
  readonly parentBranch: Int32Array;
  /** By bus: impedance of that branch in the positive, the negative and the zero sequence. */
  readonly z1: ComplexArray;
  readonly z0: ComplexArray;
  /** As `parent`, also -1 where the zero sequence does not go through. */
  readonly zeroParent: Int32Array;
  /** By bus: by how many times 30° it lags the first bus of its island. */
  readonly clockHours: Int32Array;
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

const known = new WeakMap<Model, Map<number, Topology>>();

/** Finds what is joined to what; cases that have the same branches and switches share it. */
export function shareTopology(model: Model, choice: CaseChoice): Topology {
  if (choice.opened || choice.out || choice.switches) return traceTopology(model, choice);
  const wanted = (choice.project ? 0 : ofProjectFlag) | (choice.companions ? 0 : companionFlag);
  const absent = wanted & wiringOf(model).flags;
  let topologies = known.get(model);
  if (!topologies) known.set(model, (topologies = new Map()));
  let topology = topologies.get(absent);
  if (!topology) topologies.set(absent, (topology = traceTopology(model, choice)));
  return topology;
}

/** Finds what is joined to what; time and memory are linear in the model but for the mesh's elimination order. */
export function traceTopology(model: Model, choice: CaseChoice): Topology {
  return withWorkArrays((arrays) => traceWith(arrays, model, choice));
}

/** What is needed on the way only is in `arrays`. */
function traceWith(arrays: Arrays, model: Model, choice: CaseChoice): Topology {
  const wiring = wiringOf(model);
  const joined = joinSwitchedNodes(model, choice, arrays);
  const taken = takeTreesOff(joined, wiring.isThreePhase, arrays);
  const { busOfGroup, busCount, meshCount } = numberBuses(joined, wiring, taken, arrays);
  const { parent, parentBranch } = hangBuses(taken, busOfGroup, busCount);
  const mesh = traceMesh(joined, taken, wiring, busOfGroup, meshCount);
  const busOf = ofNodes(joined, busOfGroup);
  return {
    busOf,
    busCount,
    meshCount,
    coreBranches: listCoreBranches(joined, wiring, busOfGroup),
    mesh,
    parent,
    parentBranch,
    ...gatherImpedances(wiring, parent, parentBranch, meshCount),
    clockHours: addUpClockHours(wiring, { busOf, mesh, meshCount, parent, parentBranch }),
    laterals: listLaterals(wiring, joined, taken, busOfGroup, arrays),
  };
}

/** Gives the topology of a case for a model that differs from the case's own in its impedances alone. */
export function topologyAlike(topology: Topology, model: Model): Topology {
  const wiring = wiringOf(model);
  const { parent, parentBranch, meshCount, mesh } = topology;
  return {
    ...topology,
    ...gatherImpedances(wiring, parent, parentBranch, meshCount),
    mesh: withOtherImpedances(mesh, wiring),
  };
}

/** The mesh in the order of the file, then the trees from the mesh outwards. */
function numberBuses({ groupOf }: JoinedNodes, { isThreePhase }: Wiring, taken: TakenOff, arrays: Arrays) {
  const busOfGroup = arrays.integers(groupOf.length).fill(-1);
  let busCount = 0;
  for (let node = 0; node < groupOf.length; node++) {
    if (groupOf[node] === node && isThreePhase[node] && taken.parent[node] === -1)
      busOfGroup[node] = busCount++;
  }
  const meshCount = busCount;
  for (let k = taken.count - 1; k >= taken.lateralCount; k--) busOfGroup[taken.order[k]!] = busCount++;
  return { busOfGroup, busCount, meshCount };
}

function hangBuses(taken: TakenOff, busOfGroup: Int32Array, busCount: number) {
  const parent = new Int32Array(busCount).fill(-1);
  const parentBranch = new Int32Array(busCount).fill(-1);
  for (let k = taken.lateralCount; k < taken.count; k++) {
    const group = taken.order[k]!;
    const bus = busOfGroup[group]!;
    parent[bus] = busOfGroup[taken.parent[group]!]!;
    parentBranch[bus] = taken.parentEdge[group]!;
  }
  return { parent, parentBranch };
}

function ofNodes({ groupOf }: JoinedNodes, ofGroup: Int32Array): Int32Array {
  const values = new Int32Array(groupOf.length);
  for (let node = 0; node < values.length; node++) {
    const group = groupOf[node]!;
    values[node] = group === -1 ? -1 : ofGroup[group]!;
  }
  return values;
}

function listCoreBranches({ from, to }: JoinedNodes, wiring: Wiring, busOfGroup: Int32Array): Int32Array {
  const branches = new Int32Array(wiring.from.length);
  let count = 0;
  for (let edge = 0; edge < branches.length; edge++) {
    if (from[edge] !== -1 && busOfGroup[from[edge]!] !== -1 && busOfGroup[to[edge]!] !== -1)
      branches[count++] = edge;
  }
  return branches.subarray(0, count);
}

function gatherImpedances(
  wiring: Wiring,
  parent: Int32Array,
  parentBranch: Int32Array,
  meshCount: number,
): Pick<Topology, 'z1' | 'z0' | 'zeroParent'> {
  const busCount = parent.length;
  const z1 = complexArray(busCount);
  const z0 = complexArray(busCount);
  const zeroParent = wiring.allGoThrough ? parent : parent.slice();
  for (let bus = meshCount; bus < busCount; bus++) {
    const branch = parentBranch[bus]!;
    z1.re[bus] = wiring.z1Re[branch]!;
    z1.im[bus] = wiring.z1Im[branch]!;
    z0.re[bus] = wiring.z0Re[branch]!;
    z0.im[bus] = wiring.z0Im[branch]!;
    if (!wiring.zeroGoesThrough[branch]) zeroParent[bus] = -1;
  }
  return { z1, z0, zeroParent };
}

function addUpClockHours(
  { anyShift, from, clockHours: lagOf }: Wiring,
  {
    busOf,
    mesh,
    meshCount,
    parent,
    parentBranch,
  }: Pick<Topology, 'busOf' | 'mesh' | 'meshCount' | 'parent' | 'parentBranch'>,
): Int32Array {
  const hours = new Int32Array(parent.length);
  if (!anyShift) return hours;
  const lagFrom = (u: number, branch: number) =>
    busOf[from[branch]!] === u ? lagOf[branch]! : -lagOf[branch]!;
  const { graph, branches } = mesh;
  const seen = new Uint8Array(meshCount);
  const queue = new Int32Array(meshCount);
  for (let first = 0; first < meshCount; first++) {
    if (seen[first]) continue;
    seen[first] = 1;
    queue[0] = first;
    for (let head = 0, tail = 1; head < tail; head++) {
      const u = queue[head]!;
      for (let p = graph.start[u]!; p < graph.start[u + 1]!; p++) {
        const v = graph.neighbour[p]!;
        if (seen[v]) continue;
        seen[v] = 1;
        hours[v] = hours[u]! + lagFrom(u, branches[graph.edge[p]!]!);
        queue[tail++] = v;
      }
    }
  }
  for (let bus = meshCount; bus < parent.length; bus++) {
    hours[bus] = hours[parent[bus]!]! + lagFrom(parent[bus]!, parentBranch[bus]!);
  }
  return hours;
}

function listLaterals(
  wiring: Wiring,
  joined: JoinedNodes,
  taken: TakenOff,
  busOfGroup: Int32Array,
  arrays: Arrays,
): Laterals {
  const { lateralCount } = taken;
  const spotOfGroup = arrays.integers(joined.groupOf.length).fill(-1);
  const parent = new Int32Array(lateralCount);
  const branch = new Int32Array(lateralCount);
  const tap = new Int32Array(lateralCount);
  const phases = new Uint8Array(lateralCount);
  let count = 0;
  for (let k = lateralCount - 1; k >= 0; k--) {
    const group = taken.order[k]!;
    const above = taken.parent[group]!;
    const parentSpot = spotOfGroup[above]!;
    // What hangs from neither the core nor a spot is cut off.
    if (busOfGroup[above] === -1 && parentSpot === -1) continue;
    const spot = count++;
    spotOfGroup[group] = spot;
    parent[spot] = parentSpot;
    tap[spot] = parentSpot === -1 ? busOfGroup[above]! : tap[parentSpot]!;
    const edge = taken.parentEdge[group]!;
    branch[spot] = edge < wiring.from.length ? edge : -1;
    phases[spot] = wiring.nodePhases[group]!;
  }
  return {
    spotOf: ofNodes(joined, spotOfGroup),
    parent: parent.subarray(0, count),
    branch: branch.subarray(0, count),
    tap: tap.subarray(0, count),
    phases: phases.subarray(0, count),
  };
}
