import type { Opening } from './case.ts';
import { isPresent } from './case.ts';
import type { Complex, ComplexArray } from './complex.ts';
import { add, at, divide, magnitude, multiply, scale, subtract } from './complex.ts';
import type { FaultPoint } from './faults.ts';
import { drivingPoint, listFeeds, transferOfPair } from './sequence-networks.ts';
import type { SequenceNetwork } from './sequence-networks.ts';
import type { SolvedCase } from './solve-case.ts';
import { busOfNode, findFaultPoint, solveCase } from './solve-case.ts';
import { transfersFrom } from './transfers.ts';

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
): (opening: Opening) => FaultPoint | undefined {
  const { networks } = solved;
  const before = findFaultPoint(solved, node);
  const bus = busOfNode(solved, node);
  if (!before || !solved.openCircuit.balanced || solved.choice.inverters !== 'none') {
    return (opening) => openAnew(solved, node, opening);
  }
  const columns = transfersFrom(solved, node);
  const open1 = openInSequence(solved, networks.positive, 'z1', bus, columns.z1);
  const open2 = openInSequence(solved, networks.negative, 'z2', bus, columns.z2);
  const open0 = openInSequence(solved, networks.zero, 'z0', bus, columns.z0);
  return (opening) => {
    const z1 = open1(opening);
    const z2 = open2(opening);
    const z0 = open0(opening);
    if (z1 === 'anew' || z2 === 'anew' || z0 === 'anew') return openAnew(solved, node, opening);
    return z1 && z2 ? { ...before, z1, z2, z0 } : undefined;
  };
}

function openAnew({ model, choice }: SolvedCase, node: number, opening: Opening): FaultPoint | undefined {
  const opened = [...(choice.opened ?? []), opening];
  return findFaultPoint(solveCase(model, { ...choice, opened }), node);
}

function openInSequence(
  solved: SolvedCase,
  network: SequenceNetwork,
  sequence: 'z1' | 'z2' | 'z0',
  place: number,
  column: ComplexArray,
): (opening: Opening) => Changed {
  const { model, topology } = solved;
  const feeds = countFeeds(solved, network, sequence);
  const rootOfPlace = feeds.rootOf(place);
  const unchanged = network.hasPath[place] ? drivingPoint(network, place) : null;

  return ({ branch: index, end }) => {
    const branch = model.branches[index]!;
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
    if (!unchanged || u === v || feeds.rootOf(u) !== rootOfPlace) return unchanged;
    const { parent, meshCount } = network.trees;
    const child = Math.max(u, v);
    if (child >= meshCount && parent[child] === Math.min(u, v)) {
      const beyond = isBehind(parent, place, child);
      const feedsBehind = feeds.behind[child]!;
      const feedsBefore = feeds.ofPart(child) - feedsBehind;
      if ((beyond ? feedsBehind : feedsBefore) === 0) return null;
      if ((beyond ? feedsBefore : feedsBehind) === 0) return unchanged;
    }
    const loop = subtract(
      add(drivingPoint(network, u), drivingPoint(network, v)),
      scale(transferOfPair(network, u, v), 2),
    );
    return changed(subtract(at(column, u), at(column, v)), z, loop);
  }

  /** With a shunt z at u gone: Z'_pp = Z_pp + Z_pu²/(z − Z_uu). */
  function loseShunt(u: number, z: Complex): Changed {
    if (!unchanged || feeds.rootOf(u) !== rootOfPlace) return unchanged;
    if (feeds.ofPart(u) === 1) return null;
    return changed(at(column, u), z, drivingPoint(network, u));
  }

  function changed(transfer: Complex, z: Complex, loop: Complex): Changed {
    const left = subtract(z, loop);
    if (magnitude(left) <= tooClose * (magnitude(z) + magnitude(loop))) return 'anew';
    return add(unchanged!, divide(multiply(transfer, transfer), left));
  }
}

function isBehind(parent: Int32Array, bus: number, child: number): boolean {
  let at = bus;
  while (at > child) at = parent[at]!;
  return at === child;
}

/** Counts what feeds a sequence: behind each bus of a tree, and in each part as a whole. */
function countFeeds(solved: SolvedCase, { trees }: SequenceNetwork, sequence: 'z1' | 'z2' | 'z0') {
  const { parent, meshCount } = trees;
  const { mesh } = solved.topology;
  const behind = new Int32Array(parent.length);
  for (const { bus } of listFeeds(solved.model, solved.choice, solved.topology, sequence)) behind[bus]!++;
  for (let bus = parent.length - 1; bus >= meshCount; bus--) {
    if (parent[bus] !== -1) behind[parent[bus]!]! += behind[bus]!;
  }
  const partOf = sequence === 'z0' ? mesh.zeroPartOf : mesh.partOf;
  const ofMeshPart = new Int32Array(meshCount);
  for (let bus = 0; bus < meshCount; bus++) ofMeshPart[partOf[bus]!]! += behind[bus]!;
  const rootOf = (bus: number) => {
    let root = bus;
    while (root >= meshCount && parent[root] !== -1) root = parent[root]!;
    return root < meshCount ? partOf[root]! : root;
  };
  const ofPart = (bus: number) => {
    const root = rootOf(bus);
    return root < meshCount ? ofMeshPart[root]! : behind[root]!;
  };
  return { behind, rootOf, ofPart };
}
