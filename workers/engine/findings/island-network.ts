import type { Belonging, Branch, CaseChoice, Model, ModelNode, Shunt } from '../case.ts';
import { allPhases } from '../case.ts';
import type { Complex } from '../complex.ts';
import { branchAt, nodeAt } from '../model-parts.ts';
import { openingsSeenFrom } from '../one-opening.ts';
import { choiceOfScenario } from '../scenarios.ts';
import { withCase } from '../solve-case.ts';
import { wiringOf } from '../wiring.ts';
import type { Island, IslandsOfCase } from './islands.ts';
import type { OperatingCase } from './operating-cases.ts';
import type { Screening } from './screening.ts';

/*
 * The electrical side of islands. What the outermost device cuts off is taken out of the model as a small model of its own,
 * and each nearer device is one branch opened in that: however large the network, what is solved is no larger than the island.
 */

/** What a fault at the point of interconnection sees, per unit; no z0 where the zero sequence is open. */
export type SeenImpedances = { z1: Complex; z2: Complex; z0: Complex | null };

export type IslandNetwork = {
  readonly model: Model;
  /** Index of the point of interconnection in it. */
  readonly poi: number;
  readonly islands: readonly Island[];
  /** Indices in it of the opened branches. */
  readonly openings: ReadonlyMap<Island, number>;
  readonly scenario: Pick<CaseChoice, 'switches' | 'out'>;
};

/** What is in and out in an island: its own generators and ground sources, and those that others have there. */
export type IslandChoice = {
  machines: CaseChoice['machines'];
  /** Whose grounding banks are in: all unless given. */
  banks?: CaseChoice['groundingBanks'];
  /** Ids of what is out besides. */
  out?: ReadonlySet<string>;
  project: boolean;
  /** Whether what came with generators of others is there. */
  companions: boolean;
  /** Whether a unit admittance of the positive and negative sequence stands at the point of interconnection or its tap, in place of a load. */
  holder?: boolean;
};

const known = new WeakMap<IslandsOfCase, IslandNetwork>();

/** Takes what the outermost device cuts off out of the model; nothing where none does. `added` joins the machines. */
export function cutOutIslands(
  screening: Pick<Screening, 'model' | 'poi'>,
  ofCase: IslandsOfCase,
  added: readonly Shunt[] = [],
): IslandNetwork | undefined {
  const outermost = ofCase.islands[0];
  if (!outermost) return undefined;
  if (added.length > 0) return cutOut(screening, ofCase, outermost, added);
  let network = known.get(ofCase);
  if (!network) known.set(ofCase, (network = cutOut(screening, ofCase, outermost, added)));
  return network;
}

function cutOut(
  { model, poi }: Pick<Screening, 'model' | 'poi'>,
  { operating, islands }: IslandsOfCase,
  outermost: Island,
  added: readonly Shunt[],
): IslandNetwork {
  const stub = branchAt(model, outermost.opening.branch);
  const { indexOf, nodes } = numberNodes(model, outermost, stub);
  // The opened branch comes along with its far end: a device there leaves the branch hanging from the island.
  const isHeld = ({ from, to }: { from: number; to: number }) =>
    (outermost.holds(from) && outermost.holds(to)) || (from === stub.from && to === stub.to);
  const moveAt = <S extends Belonging & { node: number }>(list: readonly S[]): S[] =>
    list
      .filter(({ node }) => outermost.holds(node))
      .map((each) => ({ ...each, ...keepOwn(each), node: indexOf[each.node]! }));
  const branches: Branch[] = [];
  const placeOf = new Map(islands.map(({ opening }) => [opening.branch, -1]));
  const ends = wiringOf(model);
  for (let index = 0; index < ends.from.length; index++) {
    if (!isHeld({ from: ends.from[index]!, to: ends.to[index]! })) continue;
    const branch = branchAt(model, index);
    if (placeOf.has(index)) placeOf.set(index, branches.length);
    branches.push({
      ...branch,
      ...keepOwn(branch),
      from: indexOf[branch.from]!,
      to: indexOf[branch.to]!,
    });
  }
  const holder: Shunt = {
    id: '',
    ofProject: false,
    companion: false,
    node: indexOf[findTap(model, operating, poi, outermost)]!,
    z1: { re: 1, im: 0 },
    z2: { re: 1, im: 0 },
    z0: null,
  };
  return {
    model: {
      baseMva: model.baseMva,
      nodes,
      nodeIndex: new Map(nodes.map(({ id }, index) => [id, index])),
      branches,
      branchIndex: new Map(branches.map(({ id }, index) => [id, index])),
      switches: model.switches
        .filter(isHeld)
        .map((link) => ({ ...link, ...keepOwn(link), from: indexOf[link.from]!, to: indexOf[link.to]! })),
      sources: [{ max: holder, min: holder }],
      machines: moveAt([...model.machines, ...added]),
      groundingBanks: moveAt(model.groundingBanks),
      inverters: moveAt(model.inverters),
    },
    poi: indexOf[poi]!,
    islands,
    openings: new Map(islands.map((each) => [each, placeOf.get(each.opening.branch)!])),
    scenario: operating.solver.scenario ? choiceOfScenario(operating.solver.scenario) : {},
  };
}

/** By node of the model: its number among those that are kept, -1 where it is not. */
function numberNodes(
  model: Model,
  { holds }: Island,
  stub: Branch,
): { indexOf: Int32Array; nodes: ModelNode[] } {
  const indexOf = new Int32Array(wiringOf(model).nodeFlags.length).fill(-1);
  const nodes: ModelNode[] = [];
  for (let node = 0; node < indexOf.length; node++) {
    if (!holds(node) && node !== stub.from && node !== stub.to) continue;
    indexOf[node] = nodes.length;
    const kept = nodeAt(model, node);
    nodes.push(kept.companion && kept.ofProject ? { ...kept, companion: false } : kept);
  }
  return { indexOf, nodes };
}

/** What came with a generator of the project stays with the project when those of others are out. */
function keepOwn({ companion, ofProject }: Belonging): { companion: boolean } {
  return { companion: companion && !ofProject };
}

/** The first node from the point of interconnection outwards that has all phases: a load that feeds faults stands there. */
function findTap(model: Model, { upstream }: OperatingCase, poi: number, { holds }: Island): number {
  const tap = upstream.path.find((node) => nodeAt(model, node).phases === allPhases && holds(node));
  return tap ?? poi;
}

/** Gives, island by island, what a fault at the point of interconnection sees; nothing where no machine or holder feeds it. */
export function seeFromPoi(network: IslandNetwork, given: IslandChoice): (SeenImpedances | undefined)[] {
  const { model, poi, islands, openings } = network;
  return withCase(model, choiceOfIsland(network, given), (solved, arrays) => {
    const findPoint = openingsSeenFrom(solved, poi, arrays);
    return islands.map((island) => {
      const point = findPoint({ branch: openings.get(island)!, end: island.opening.end });
      return point && { z1: point.z1, z2: point.z2, z0: point.z0 };
    });
  });
}

export function choiceOfIsland(
  { scenario }: Pick<IslandNetwork, 'scenario'>,
  { machines, banks = 'all', out, project, companions, holder = false }: IslandChoice,
): CaseChoice {
  return {
    sources: holder ? 'max' : 'out',
    prefaultFactor: 1,
    machines,
    inverters: 'none',
    groundingBanks: banks,
    project,
    companions,
    ...scenario,
    ...(out?.size ? { out: new Set([...out, ...(scenario.out ?? [])]) } : {}),
  };
}
