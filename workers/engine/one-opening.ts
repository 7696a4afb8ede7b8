import type { Opening } from './case.ts';
import { isPresent } from './case.ts';
import type { Complex, ComplexArray } from './complex.ts';
import { add, at, divide, magnitude, multiply, scale, subtract } from './complex.ts';
import type { FaultPoint } from './faults.ts';
import { findBridges } from './mesh-bridges.ts';
import { branchAt } from './model-parts.ts';
import { drivingPoint, listFeeds, transferOfPair } from './sequence-networks.ts';
import type { SequenceNetwork } from './sequence-networks.ts';
import type { SolvedCase } from './solve-case.ts';
import { busOfNode, findFaultPoint, withCase } from './solve-case.ts';
import { transfersFrom } from './transfers.ts';
import { wiringOf } from './wiring.ts';
import type { Arrays } from './work-arrays.ts';
import { newArrays } from './work-arrays.ts';

/*
 * One place, with each of many branches opened alone. Opening a branch of impedance z between u and v is a change of rank
 * one, and the column of Z at the place p together with the entries of the branch tell all of it:
 *   Z'_pp = Z_pp + (Z_pu − Z_pv)²/(z − (Z_uu + Z_vv − 2·Z_uv)).
 * So one sweep for each sequence serves all openings. Where an opening leaves one side without any source, z is exactly what
 * is subtracted from it; which side that is, is a matter of what is joined to what, and not of a small difference.
 */

/* Where so little is left of the difference, a new solve is the better answer. */
const tooClose = 1e-9;

/** null: nothing feeds the place any more; 'anew': to be solved again. */
type Changed = Complex | null | 'anew';

/** Makes a finder of what a fault at `node` finds with one branch opened, without inverters; nothing where nothing feeds it. */
export function openingsSeenFrom(
  solved: SolvedCase,
  node: number,
  arrays: Arrays = newArrays,
): (opening: Opening) => FaultPoint | undefined {
  const { networks } = solved;
  const before = findFaultPoint(solved, node);
  const bus = busOfNode(solved, node);
  if (!before || !solved.openCircuit.balanced || solved.choice.inverters !== 'none') {
    return (opening) => openAnew(solved, node, opening);
  }
  const columns = transfersFrom(solved, node, arrays);
  const open1 = openInSequence(solved, networks.positive, 'z1', bus, columns.z1, arrays);
  const alike = networks.negative === networks.positive;
  const open2 = alike ? undefined : openInSequence(solved, networks.negative, 'z2', bus, columns.z2, arrays);
  const open0 = openInSequence(solved, networks.zero, 'z0', bus, columns.z0, arrays);
  return (opening) => {
    const z1 = open1(opening);
    const z2 = open2 ? open2(opening) : z1;
    const z0 = open0(opening);
    if (z1 === 'anew' || z2 === 'anew' || z0 === 'anew') return openAnew(solved, node, opening);
    return z1 && z2 ? { ...before, z1, z2, z0 } : undefined;
  };
}

function openAnew({ model, choice }: SolvedCase, node: number, opening: Opening): FaultPoint | undefined {
  const opened = [...(choice.opened ?? []), opening];
  return withCase(model, { ...choice, opened }, (solved) => findFaultPoint(solved, node));
}

function openInSequence(
  solved: SolvedCase,
  network: SequenceNetwork,
  sequence: 'z1' | 'z2' | 'z0',
  place: number,
  column: ComplexArray,
  arrays: Arrays,
): (opening: Opening) => Changed {
  const { model, topology } = solved;
  const feeds = countFeeds(solved, network, sequence, place, arrays);
  const rootOfPlace = feeds.rootOf[place];
  const unchanged = network.hasPath[place] ? drivingPoint(network, place) : null;

  return ({ branch: index, end }) => {
    const branch = branchAt(model, index);
    const u = topology.busOf[branch.from]!;
    const v = topology.busOf[branch.to]!;
    // A lateral opens beyond the core, and what is absent or open already has nothing to open.
    const isOpen = solved.choice.opened?.some((each) => each.branch === index);
    if (u === -1 || v === -1 || isOpen || !isPresent(solved.choice, branch)) return 'anew';
    if (sequence !== 'z0') return openSeries(u, v, branch.z1);
    const path = branch.zeroSequence;
    if (path.kind === 'series') return openSeries(u, v, path.z);
    if (path.kind === 'open' || path.end !== end) return unchanged;
    return loseShunt(path.end === 'from' ? u : v, path.z);
  };

  function openSeries(u: number, v: number, z: Complex): Changed {
    if (!unchanged || u === v || feeds.rootOf[u] !== rootOfPlace) return unchanged;
    const sides = feeds.findSides(u, v);
    if (sides) {
      const { behind, before, placeIsBehind } = sides;
      if ((placeIsBehind ? behind : before) === 0) return null;
      if ((placeIsBehind ? before : behind) === 0) return unchanged;
    }
    const loop = subtract(
      add(drivingPoint(network, u), drivingPoint(network, v)),
      scale(transferOfPair(network, u, v), 2),
    );
    return changed(subtract(at(column, u), at(column, v)), z, loop);
  }

  /** With a shunt z at u gone: Z'_pp = Z_pp + Z_pu²/(z − Z_uu). */
  function loseShunt(u: number, z: Complex): Changed {
    if (!unchanged || feeds.rootOf[u] !== rootOfPlace) return unchanged;
    if (feeds.ofPart(u) === 1) return null;
    return changed(at(column, u), z, drivingPoint(network, u));
  }

  function changed(transfer: Complex, z: Complex, loop: Complex): Changed {
    const left = subtract(z, loop);
    if (magnitude(left) <= tooClose * (magnitude(z) + magnitude(loop))) return 'anew';
    return add(unchanged!, divide(multiply(transfer, transfer), left));
  }
}

/** What feeds a sequence on the two sides of a branch that nothing else joins. */
type Sides = { behind: number; before: number; placeIsBehind: boolean };

/**
 * Counts what feeds a sequence: behind each bus of a tree and each bridge of the mesh, and in each part as a whole. Walks to
 * the root and from `place` are walked once for all openings, since a feeder can be one long chain.
 */
function countFeeds(
  solved: SolvedCase,
  { trees }: SequenceNetwork,
  sequence: 'z1' | 'z2' | 'z0',
  place: number,
  arrays: Arrays,
) {
  const { parent, meshCount } = trees;
  const { mesh } = solved.topology;
  const behind = arrays.integers(parent.length);
  for (const { bus } of listFeeds(solved.model, solved.choice, solved.topology, sequence)) behind[bus]!++;
  for (let bus = parent.length - 1; bus >= meshCount; bus--) {
    if (parent[bus] !== -1) behind[parent[bus]!]! += behind[bus]!;
  }
  /** By bus: what it shares with all of its part: a bus of the mesh, or that from which its tree hangs alone. */
  const rootOf = arrays.integers(parent.length);
  const partOf = sequence === 'z0' ? mesh.zeroPartOf : mesh.partOf;
  const ofMeshPart = new Int32Array(meshCount);
  for (let bus = 0; bus < meshCount; bus++) {
    rootOf[bus] = partOf[bus]!;
    ofMeshPart[partOf[bus]!]! += behind[bus]!;
  }
  for (let bus = meshCount; bus < parent.length; bus++) {
    rootOf[bus] = parent[bus] === -1 ? bus : rootOf[parent[bus]!]!;
  }
  const ofPart = (bus: number) => {
    const root = rootOf[bus]!;
    return root < meshCount ? ofMeshPart[root]! : behind[root]!;
  };

  const isOnWay = arrays.bytes(parent.length);
  let outermost = place;
  for (; outermost >= meshCount && parent[outermost] !== -1; outermost = parent[outermost]!) {
    isOnWay[outermost] = 1;
  }
  const { zeroGoesThrough } = wiringOf(solved.model);
  const passes = (edge: number) => sequence !== 'z0' || zeroGoesThrough[mesh.branches[edge]!] === 1;
  const bridges = findBridges(mesh.graph, passes);
  /** By place in the walk over the mesh: what feeds all places before it. */
  const upTo = new Int32Array(meshCount + 1);
  for (let bus = 0; bus < meshCount; bus++) upTo[bridges.place[bus]! + 1] = behind[bus]!;
  for (let at = 0; at < meshCount; at++) upTo[at + 1]! += upTo[at]!;

  /** Tells the sides of a branch of the network; nothing where its ends are joined another way too. */
  function findSides(u: number, v: number): Sides | undefined {
    const outer = Math.max(u, v);
    const inner = Math.min(u, v);
    if (outer < meshCount) {
      if (bridges.bridgeFrom[u] === v) return sidesOfBridge(u);
      return bridges.bridgeFrom[v] === u ? sidesOfBridge(v) : undefined;
    }
    if (parent[outer] !== inner) return undefined;
    const fed = behind[outer]!;
    return { behind: fed, before: ofPart(outer) - fed, placeIsBehind: isOnWay[outer] === 1 };
  }

  function sidesOfBridge(child: number): Sides {
    const [first, end] = [bridges.place[child]!, bridges.end[child]!];
    const fed = upTo[end]! - upTo[first]!;
    const at = bridges.place[outermost]!;
    return { behind: fed, before: ofPart(child) - fed, placeIsBehind: at >= first && at < end };
  }

  return { rootOf, ofPart, findSides };
}
