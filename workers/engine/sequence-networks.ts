import type { Branch, CaseChoice, Model, Shunt } from './case.ts';
import { isMember, isPresent } from './case.ts';
import type { Complex } from './complex.ts';
import { addAt, complexArray, divide } from './complex.ts';
import { orderByMinimumDegree } from './elimination-order.ts';
import { analyseStructure, factorize } from './factorization.ts';
import { DisjointSets } from './graph.ts';
import type { SelectedInverse } from './selected-inverse.ts';
import { invertSelected } from './selected-inverse.ts';
import type { Topology } from './topology.ts';

/*
 * The three networks of a case, each as the wanted entries of its inverse. They share buses and branches, and so one
 * elimination order; the zero sequence merely lacks some of the branches.
 */

export type SequenceNetwork = {
  readonly inverse: SelectedInverse;
  /** By bus: whether current has a path at all. Where it has none the entries of the inverse mean nothing. */
  readonly hasPath: Uint8Array;
};

export type SequenceNetworks = {
  readonly positive: SequenceNetwork;
  readonly negative: SequenceNetwork;
  readonly zero: SequenceNetwork;
};

const unity: Complex = { re: 1, im: 0 };

/** Builds, factorizes and inverts the networks of one case. */
export function solveSequenceNetworks(
  model: Model,
  choice: CaseChoice,
  topology: Topology,
): SequenceNetworks {
  const shunts = listShunts(model, choice);
  const branches = topology.coreBranches.map((index) => model.branches[index]!);
  const structure = analyseStructure(
    { start: topology.core.start, neighbour: topology.core.neighbour },
    orderByMinimumDegree(topology.core),
  );

  const feeds = (z: (shunt: Shunt) => Complex | null) => {
    const ends: Feed[] = [];
    for (const shunt of shunts) {
      const value = z(shunt);
      const bus = topology.busOf[shunt.node]!;
      if (value && bus !== -1) ends.push({ bus, z: value });
    }
    return ends;
  };
  const series = branches.map((branch) => branch.z1);
  const positive = solve(
    series,
    feeds((shunt) => shunt.z1),
  );
  const zeroFeeds = feeds((shunt) => shunt.z0);
  for (const [bus, z] of transformerEarths(model, choice, topology)) zeroFeeds.push({ bus, z });
  return {
    positive,
    // Lines and transformers do not tell the two apart, so only machines and sources can.
    negative: shunts.every(isSymmetrical)
      ? positive
      : solve(
          series,
          feeds((shunt) => shunt.z2),
        ),
    zero: solve(branches.map(seriesOfZeroSequence), zeroFeeds),
  };

  function solve(seriesZ: readonly (Complex | null)[], seriesFeeds: readonly Feed[]): SequenceNetwork {
    const { busCount, core } = topology;
    const diagonal = complexArray(busCount);
    const offDiagonal = complexArray(core.neighbour.length);
    const parts = new DisjointSets(busCount);
    for (let bus = 0; bus < busCount; bus++) {
      for (let p = core.start[bus]!; p < core.start[bus + 1]!; p++) {
        const z = seriesZ[core.edge[p]!];
        if (!z) continue;
        const y = divide(unity, z);
        addAt(diagonal, bus, y);
        offDiagonal.re[p] = -y.re;
        offDiagonal.im[p] = -y.im;
        parts.join(bus, core.neighbour[p]!);
      }
    }
    const fed = new Uint8Array(busCount);
    for (const { bus, z } of seriesFeeds) {
      addAt(diagonal, bus, divide(unity, z));
      fed[parts.find(bus)] = 1;
    }
    const hasPath = Uint8Array.from(fed, (_, bus) => fed[parts.find(bus)]!);
    // A part without a path to earth has no inverse; a unit admittance at each bus lets the rest be solved with it.
    hasPath.forEach((path, bus) => {
      if (!path) addAt(diagonal, bus, unity);
    });
    return { inverse: invertSelected(factorize(structure, diagonal, offDiagonal)), hasPath };
  }
}

function isSymmetrical({ z1, z2 }: Shunt): boolean {
  return z1?.re === z2?.re && z1?.im === z2?.im;
}

type Feed = { bus: number; z: Complex };

function seriesOfZeroSequence({ zeroSequence }: Branch): Complex | null {
  return zeroSequence.kind === 'series' ? zeroSequence.z : null;
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

/** Zero-sequence shunts of star-delta transformers, also of one that is opened at its other end. */
function* transformerEarths(
  model: Model,
  choice: CaseChoice,
  topology: Topology,
): Generator<[number, Complex]> {
  const { busOf, coreBranches } = topology;
  const opened = choice.opened;
  const candidates = opened ? [...coreBranches, opened.branch] : coreBranches;
  for (const index of candidates) {
    const branch = model.branches[index]!;
    const path = branch.zeroSequence;
    if (path.kind !== 'shunt' || !isPresent(choice, branch)) continue;
    const bus = busOf[branch[path.end]]!;
    if (bus === -1 || (opened?.branch === index && opened.end === path.end)) continue;
    yield [bus, path.z];
  }
}
