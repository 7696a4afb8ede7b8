import type { CaseChoice, Model, Shunt } from './case.ts';
import { isMember, isPresent } from './case.ts';
import type { Complex, ComplexArray } from './complex.ts';
import { complexArray } from './complex.ts';
import { factorize, solveInPlace } from './factorization.ts';
import { branchAt } from './model-parts.ts';
import type { SelectedInverse } from './selected-inverse.ts';
import { invertSelected, meshDrivingPoint, meshTransfer } from './selected-inverse.ts';
import type { Mesh, MeshAdmittances } from './mesh.ts';
import type { Topology } from './topology.ts';
import type { Trees } from './tree-sweep.ts';
import {
  sweepCurrentsTowardsMesh,
  sweepFromMesh,
  sweepTowardsMesh,
  sweepVoltagesFromMesh,
} from './tree-sweep.ts';
import { wiringOf } from './wiring.ts';
import type { Arrays } from './work-arrays.ts';
import { newArrays } from './work-arrays.ts';

/*
 * The three networks of a case. They share buses, branches and elimination order; the zero sequence merely lacks some of
 * the branches. Trees are swept, and the mesh alone is factorized.
 */

export type SequenceNetwork = {
  readonly trees: Trees;
  /** By bus: the share of its parent's voltage that it sees (see tree-sweep.ts); without meaning in the mesh. */
  readonly shares: ComplexArray;
  readonly mesh: SelectedInverse;
  /** By bus: driving-point impedance. */
  readonly z: ComplexArray;
  /** By bus: whether current has a path at all. Where it has none the impedances mean nothing. */
  readonly hasPath: Uint8Array;
  /** Buses where the network resonates, so that numbers are unsafe. */
  readonly weakBuses: readonly number[];
};

type OfSequences<N> = { readonly positive: N; readonly negative: N; readonly zero: N };

export type SequenceNetworks = OfSequences<SequenceNetwork>;

/** What is known of networks that are only asked for driving-point impedances. */
export type DrivingPoints = OfSequences<Pick<SequenceNetwork, 'z' | 'hasPath'>>;

/** Builds, sweeps and factorizes the networks of one case. */
export function solveSequenceNetworks(
  model: Model,
  choice: CaseChoice,
  topology: Topology,
  arrays: Arrays = newArrays,
): SequenceNetworks {
  return ofSequences(model, choice, topology, (sequence, feeds) =>
    solveNetwork(topology, sequence, feeds, arrays),
  );
}

/** As `solveSequenceNetworks`, in less memory: what only later sweeps need is written over, one sequence after the other. */
export function solveDrivingPoints(
  model: Model,
  choice: CaseChoice,
  topology: Topology,
  arrays: Arrays,
): DrivingPoints {
  const spare = arrays.complex(topology.busCount);
  return ofSequences(model, choice, topology, (sequence, feeds) => {
    spare.re.fill(0);
    spare.im.fill(0);
    const { z, hasPath } = solveNetwork(topology, sequence, feeds, arrays, spare);
    return { z, hasPath };
  });
}

/** Solves each sequence with what feeds it; positive and negative together where nothing tells them apart. */
export function ofSequences<N>(
  model: Model,
  choice: CaseChoice,
  topology: Topology,
  solve: (sequence: Sequence, feeds: readonly Feed[]) => N,
): OfSequences<N> {
  const shunts = listShunts(model, choice);
  const solveOne = (sequence: Sequence) =>
    solve(sequence, listFeeds(model, choice, topology, sequence, shunts));
  const positive = solveOne('z1');
  return {
    positive,
    // Lines and transformers do not, so only machines and sources can.
    negative: shunts.every(isSymmetrical) ? positive : solveOne('z2'),
    zero: solveOne('z0'),
  };
}

export type Sequence = 'z1' | 'z2' | 'z0';

export type Feed = { bus: number; z: Complex };

function solveNetwork(
  topology: Topology,
  sequence: Sequence,
  feeds: readonly Feed[],
  arrays: Arrays,
  shares = arrays.complex(topology.busCount),
): SequenceNetwork {
  const { busCount, meshCount } = topology;
  const isZero = sequence === 'z0';
  const trees: Trees = {
    parent: isZero ? topology.zeroParent : topology.parent,
    series: isZero ? topology.z0 : topology.z1,
    meshCount,
  };
  const hasPath = arrays.bytes(busCount);
  const meshScale = new Float64Array(meshCount);
  for (const { bus, z } of feeds) {
    const square = z.re * z.re + z.im * z.im;
    shares.re[bus]! += z.re / square;
    shares.im[bus]! -= z.im / square;
    hasPath[bus] = 1;
    if (bus < meshCount) meshScale[bus]! += (Math.abs(z.re) + Math.abs(z.im)) / square;
  }
  const weakBuses: number[] = [];
  sweepTowardsMesh(trees, shares, hasPath, meshScale, weakBuses);
  const z = arrays.complex(busCount);
  const series = isZero ? topology.mesh.zero : topology.mesh.positive;
  const mesh = solveMesh(topology.mesh, isZero, series, shares, hasPath, meshScale, weakBuses);
  for (let bus = 0; bus < meshCount; bus++) {
    const own = meshDrivingPoint(mesh, bus);
    z.re[bus] = own.re;
    z.im[bus] = own.im;
  }
  sweepFromMesh(trees, shares, z, hasPath, weakBuses);
  return { trees, shares, mesh, z, hasPath, weakBuses };
}

/** Adds the mesh's branches to what its buses carry, and inverts; says in `hasPath` which parts of it are fed. */
export function solveMesh(
  mesh: Mesh,
  isZero: boolean,
  series: MeshAdmittances,
  behind: ComplexArray,
  hasPath: Uint8Array,
  scale: Float64Array,
  weakBuses: number[],
): SelectedInverse {
  const { structure } = mesh;
  const partOf = isZero ? mesh.zeroPartOf : mesh.partOf;
  const meshCount = partOf.length;
  for (let bus = 0; bus < meshCount; bus++) if (hasPath[bus]) hasPath[partOf[bus]!] = 1;
  const diagonal = complexArray(meshCount);
  for (let bus = 0; bus < meshCount; bus++) {
    hasPath[bus] = hasPath[partOf[bus]!]!;
    // A part without a path to earth has no inverse; a unit admittance at each bus lets the rest be solved with it.
    diagonal.re[bus] = series.diagonal.re[bus]! + (hasPath[bus] ? behind.re[bus]! : 1);
    diagonal.im[bus] = series.diagonal.im[bus]! + (hasPath[bus] ? behind.im[bus]! : 0);
    scale[bus]! += series.scale[bus]!;
  }
  const factors = factorize(structure, diagonal, series.offDiagonal, scale);
  for (const bus of factors.weakBuses) weakBuses.push(bus);
  return invertSelected(factors);
}

/** Gives Z_uu of a bus. */
export function drivingPoint({ z }: Pick<SequenceNetwork, 'z'>, bus: number): Complex {
  return { re: z.re[bus]!, im: z.im[bus]! };
}

/** Gives Z_uv of two buses that are the same or joined by a branch; any other pair throws. */
export function transferOfPair(network: SequenceNetwork, u: number, v: number): Complex {
  if (u === v) return drivingPoint(network, u);
  const { trees, mesh, shares, z } = network;
  const { parent, meshCount } = trees;
  if (u < meshCount && v < meshCount) return meshTransfer(mesh, u, v);
  const child = Math.max(u, v);
  const p = Math.min(u, v);
  if (parent[child] !== p) throw new Error(`Expected two buses joined by a branch, got ${u} and ${v}.`);
  return {
    re: shares.re[child]! * z.re[p]! - shares.im[child]! * z.im[p]!,
    im: shares.re[child]! * z.im[p]! + shares.im[child]! * z.re[p]!,
  };
}

/** Turns currents out of the buses into the voltages they make, V = Z·I for all buses at once, in place. */
export function solveVoltages({ trees, shares, mesh, hasPath }: SequenceNetwork, values: ComplexArray): void {
  for (let bus = 0; bus < hasPath.length; bus++) {
    if (hasPath[bus] === 0) values.re[bus] = values.im[bus] = 0;
  }
  sweepCurrentsTowardsMesh(trees, shares, values);
  solveInPlace(mesh.factors, values);
  sweepVoltagesFromMesh(trees, shares, values);
}

function isSymmetrical({ z1, z2 }: Shunt): boolean {
  return z1?.re === z2?.re && z1?.im === z2?.im;
}

/** The sources, machines and banks that take part. */
function listShunts(model: Model, choice: CaseChoice): Shunt[] {
  const shunts: Shunt[] = [];
  if (choice.sources !== 'out') {
    for (const source of model.sources) {
      const shunt = source[choice.sources];
      if (isPresent(choice, shunt)) shunts.push(shunt);
    }
  }
  const addMembers = (list: readonly Shunt[], membership: CaseChoice['machines']) => {
    for (const shunt of list) {
      if (isPresent(choice, shunt) && isMember(membership, shunt.ofProject)) shunts.push(shunt);
    }
  };
  addMembers(model.machines, choice.machines);
  addMembers(model.groundingBanks, choice.groundingBanks);
  return shunts;
}

/** Lists what ties a sequence to earth: sources, machines, banks and star-delta transformers. */
export function listFeeds(
  model: Model,
  choice: CaseChoice,
  topology: Topology,
  sequence: Sequence,
  shunts = listShunts(model, choice),
): readonly Feed[] {
  const feeds = sequence === 'z0' ? listTransformerEarths(model, choice, topology) : [];
  for (const shunt of shunts) {
    const z = shunt[sequence];
    const bus = topology.busOf[shunt.node]!;
    if (z && bus !== -1) feeds.push({ bus, z });
  }
  return feeds;
}

/** Zero-sequence shunts of star-delta transformers, also of one that is opened at its other end. */
function listTransformerEarths(model: Model, choice: CaseChoice, { busOf }: Topology): Feed[] {
  const earths: Feed[] = [];
  for (const { branch: index, end, z } of wiringOf(model).earths) {
    const branch = branchAt(model, index);
    if (!isPresent(choice, branch)) continue;
    const opening = choice.opened?.find((each) => each.branch === index);
    if (opening?.end === end || busOf[branch[end]] === -1) continue;
    // Unless it is opened, a branch is there only where both its ends are.
    if (!opening && busOf[branch[end === 'from' ? 'to' : 'from']] === -1) continue;
    earths.push({ bus: busOf[branch[end]]!, z });
  }
  return earths;
}
