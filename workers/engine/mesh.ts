import type { ComplexArray } from './complex.ts';
import { complexArray } from './complex.ts';
import { orderByMinimumDegree } from './elimination-order.ts';
import type { Structure } from './factorization.ts';
import { analyseStructure } from './factorization.ts';
import type { Graph } from './graph.ts';
import { DisjointSets, buildGraph } from './graph.ts';
import type { JoinedNodes } from './joined-nodes.ts';
import type { TakenOff } from './trees.ts';
import type { Wiring } from './wiring.ts';

/* What is left of the core when its trees are taken off: loops, what lies between them, and one bus of each tree alone. */

export type Mesh = {
  /** Its edges count along `branches`. */
  readonly graph: Graph;
  readonly branches: Int32Array;
  readonly structure: Structure;
  /** By bus of the mesh: a bus that all of its part share, in the positive and in the zero sequence. */
  readonly partOf: Int32Array;
  readonly zeroPartOf: Int32Array;
  /** Its branches alone, in the positive and negative and in the zero sequence. */
  readonly positive: MeshAdmittances;
  readonly zero: MeshAdmittances;
};

/** Admittance matrix of branches: by bus, and by entry of the graph; `scale` is the size of what a row is made of. */
export type MeshAdmittances = {
  readonly diagonal: ComplexArray;
  readonly offDiagonal: ComplexArray;
  readonly scale: Float64Array;
};

/** Gathers the mesh of buses 0 … count − 1, of which `busOfGroup` tells. */
export function traceMesh(
  { from, to }: JoinedNodes,
  { isEdgeTaken }: TakenOff,
  wiring: Wiring,
  busOfGroup: Int32Array,
  count: number,
): Mesh {
  const branches: number[] = [];
  for (let edge = 0; edge < wiring.from.length; edge++) {
    if (isEdgeTaken[edge] || from[edge] === to[edge]) continue;
    // What is left of an unsound lateral is not of the core.
    if (busOfGroup[from[edge]!] !== -1 && busOfGroup[to[edge]!] !== -1) branches.push(edge);
  }
  const us = new Int32Array(branches.length);
  const vs = new Int32Array(branches.length);
  for (let index = 0; index < branches.length; index++) {
    us[index] = busOfGroup[from[branches[index]!]!]!;
    vs[index] = busOfGroup[to[branches[index]!]!]!;
  }
  const graph = buildGraph(count, us, vs);
  const partOf = findParts(count, us, vs);
  return {
    graph,
    branches: Int32Array.from(branches),
    structure: analyseStructure(graph, orderByMinimumDegree(graph)),
    partOf,
    zeroPartOf: wiring.allGoThrough ? partOf : findZeroParts(count, us, vs, branches, wiring),
    ...admittancesOf(graph, branches, wiring),
  };
}

/** Gives the same mesh with the impedances of another model. */
export function withOtherImpedances(mesh: Mesh, wiring: Wiring): Mesh {
  const { graph, branches } = mesh;
  return { ...mesh, ...admittancesOf(graph, branches, wiring) };
}

function admittancesOf(
  graph: Graph,
  branches: ArrayLike<number>,
  { z1Re, z1Im, z0Re, z0Im }: Wiring,
): Pick<Mesh, 'positive' | 'zero'> {
  const ofEdges = (values: Float64Array) => {
    const gathered = new Float64Array(branches.length);
    for (let edge = 0; edge < gathered.length; edge++) gathered[edge] = values[branches[edge]!]!;
    return gathered;
  };
  return {
    positive: addUpAdmittances(graph, ofEdges(z1Re), ofEdges(z1Im)),
    zero: addUpAdmittances(graph, ofEdges(z0Re), ofEdges(z0Im)),
  };
}

function findParts(count: number, us: ArrayLike<number>, vs: ArrayLike<number>): Int32Array {
  const parts = new DisjointSets(count);
  for (let index = 0; index < us.length; index++) parts.join(us[index]!, vs[index]!);
  const partOf = new Int32Array(count);
  for (let bus = 0; bus < count; bus++) partOf[bus] = parts.find(bus);
  return partOf;
}

function findZeroParts(
  count: number,
  us: Int32Array,
  vs: Int32Array,
  branches: readonly number[],
  { zeroGoesThrough }: Wiring,
): Int32Array {
  const goesThrough = (_: number, index: number) => zeroGoesThrough[branches[index]!] === 1;
  return findParts(count, us.filter(goesThrough), vs.filter(goesThrough));
}

/** Takes impedances by edge. One of zero is of a branch that the sequence does not pass: its entries stay zero. */
export function addUpAdmittances(graph: Graph, zRe: Float64Array, zIm: Float64Array): MeshAdmittances {
  const count = graph.start.length - 1;
  const diagonal = complexArray(count);
  const offDiagonal = complexArray(graph.neighbour.length);
  const scale = new Float64Array(count);
  for (let bus = 0; bus < count; bus++) {
    for (let p = graph.start[bus]!; p < graph.start[bus + 1]!; p++) {
      const edge = graph.edge[p]!;
      const square = zRe[edge]! * zRe[edge]! + zIm[edge]! * zIm[edge]!;
      if (square === 0) continue;
      const yRe = zRe[edge]! / square;
      const yIm = -zIm[edge]! / square;
      diagonal.re[bus]! += yRe;
      diagonal.im[bus]! += yIm;
      offDiagonal.re[p] = -yRe;
      offDiagonal.im[p] = -yIm;
      scale[bus]! += 2 * (Math.abs(yRe) + Math.abs(yIm));
    }
  }
  return { diagonal, offDiagonal, scale };
}
