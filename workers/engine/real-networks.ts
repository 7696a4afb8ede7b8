import { addUpAdmittances } from './mesh.ts';
import { meshDrivingPoint } from './selected-inverse.ts';
import type { Feed } from './sequence-networks.ts';
import { solveMesh } from './sequence-networks.ts';
import type { Topology } from './topology.ts';
import { replacement, vanishing } from './tree-sweep.ts';
import type { Wiring } from './wiring.ts';
import type { Arrays } from './work-arrays.ts';

/*
 * A sequence network of resistances alone, or of reactances alone: without their common factor j those are real too. The
 * sweeps are those of tree-sweep.ts in real numbers, at half the cost; the mesh is left to the complex ones.
 */

/** Gives the one number that stands for an impedance. */
export type RealPart = (re: number, im: number) => number;

/** The network to take real parts of: of a topology, in the zero sequence or in one of the others. */
type Whole = { topology: Topology; wiring: Wiring; isZero: boolean; feeds: readonly Feed[] };

/** By bus the driving-point value and whether current has a path. */
type RealDrivingPoints = { values: Float64Array; hasPath: Uint8Array };

/** Solves the network of real parts; `spare` is for numbers on the way, as many as there are buses. */
export function solveRealNetwork(
  whole: Whole,
  part: RealPart,
  arrays: Arrays,
  spare: Float64Array,
): RealDrivingPoints {
  const { topology, isZero, feeds } = whole;
  const { busCount, meshCount } = topology;
  const parent = isZero ? topology.zeroParent : topology.parent;
  const { re, im } = isZero ? topology.z0 : topology.z1;
  const shares = spare.fill(0);
  const hasPath = arrays.bytes(busCount);
  const meshScale = new Float64Array(meshCount);
  for (const { bus, z } of feeds) {
    const y = 1 / part(z.re, z.im);
    shares[bus]! += y;
    hasPath[bus] = 1;
    if (bus < meshCount) meshScale[bus]! += Math.abs(y);
  }
  // Each bus has the value of its branch here until its own takes the place.
  const values = arrays.floats(busCount);
  for (let bus = meshCount; bus < busCount; bus++) values[bus] = part(re[bus]!, im[bus]!);
  sweepTowardsMesh(parent, values, shares, hasPath, meshScale);
  solveMeshPart(whole, part, shares, hasPath, meshScale, values);
  sweepFromMesh(parent, meshCount, shares, hasPath, values);
  return { values, hasPath };
}

function sweepTowardsMesh(
  parent: Int32Array,
  series: Float64Array,
  shares: Float64Array,
  fed: Uint8Array,
  meshScale: Float64Array,
): void {
  const meshCount = meshScale.length;
  for (let bus = parent.length - 1; bus >= meshCount; bus--) {
    const p = parent[bus]!;
    if (p < 0) continue;
    if (fed[bus] === 0) {
      shares[bus] = 1;
      continue;
    }
    const product = series[bus]! * shares[bus]!;
    const size = 1 + Math.abs(product);
    const isWeak = Math.abs(1 + product) <= vanishing * size;
    const share = 1 / (isWeak ? replacement * size : 1 + product);
    const given = shares[bus]! * share;
    shares[bus] = share;
    shares[p]! += given;
    fed[p] = 1;
    if (p < meshCount) meshScale[p]! += Math.abs(given);
  }
}

function solveMeshPart(
  { topology: { mesh, meshCount }, wiring, isZero }: Whole,
  part: RealPart,
  shares: Float64Array,
  hasPath: Uint8Array,
  meshScale: Float64Array,
  values: Float64Array,
): void {
  const re = isZero ? wiring.z0Re : wiring.z1Re;
  const im = isZero ? wiring.z0Im : wiring.z1Im;
  const ofEdges = new Float64Array(mesh.branches.length);
  for (let edge = 0; edge < ofEdges.length; edge++) {
    const branch = mesh.branches[edge]!;
    ofEdges[edge] = part(re[branch]!, im[branch]!);
  }
  const admittances = addUpAdmittances(mesh.graph, ofEdges, new Float64Array(ofEdges.length));
  const behind = { re: shares, im: new Float64Array(meshCount) };
  const inverse = solveMesh(mesh, isZero, admittances, behind, hasPath, meshScale, []);
  for (let bus = 0; bus < meshCount; bus++) values[bus] = meshDrivingPoint(inverse, bus).re;
}

function sweepFromMesh(
  parent: Int32Array,
  meshCount: number,
  shares: Float64Array,
  hasPath: Uint8Array,
  values: Float64Array,
): void {
  for (let bus = meshCount; bus < parent.length; bus++) {
    const p = parent[bus]!;
    const share = shares[bus]!;
    if (p < 0) {
      // What stands behind it alone feeds it, and a bus without path has no value.
      if (hasPath[bus] !== 0) values[bus] = 1 / share;
      continue;
    }
    hasPath[bus] = hasPath[p]!;
    const through = share * values[p]!;
    const sum = values[bus]! + through;
    const isWeak = hasPath[bus] !== 0 && Math.abs(sum) <= vanishing * Math.abs(through);
    values[bus] = isWeak ? replacement * Math.abs(through) : share * sum;
  }
}
