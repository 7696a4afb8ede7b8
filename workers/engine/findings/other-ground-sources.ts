import { isClosed, isInService } from '../case.ts';
import { buildGraph } from '../graph.ts';
import { branchAt } from '../model-parts.ts';
import { wiringOf } from '../wiring.ts';
import type { IslandNetwork } from './island-network.ts';
import { choiceOfIsland } from './island-network.ts';

/* Machines and ground sources of others in an island: whichever is in or out there, the worst combination decides. */

/** One combination of what others have in. */
export type Combination = {
  readonly words: string;
  readonly machines: 'all' | 'project';
  readonly banks: 'all' | 'project';
  /** Ids of transformers that are out as ground sources. */
  readonly out: ReadonlySet<string>;
};

const nothing: ReadonlySet<string> = new Set();

/**
 * Lists the combinations of others' machines in or out with others' ground sources in or out, everything in first; those that
 * would only repeat another are left away. `alsoTied` are nodes that have to stay tied to the island.
 */
export function listCombinations(network: IslandNetwork, alsoTied: readonly number[] = []): Combination[] {
  const hasMachines = network.model.machines.some(({ ofProject }) => !ofProject);
  const hasBanks = network.model.groundingBanks.some(({ ofProject }) => !ofProject);
  const withMachines = hasMachines ? (['all', 'project'] as const) : (['all'] as const);
  return withMachines.flatMap((machines): Combination[] => {
    const out = listSpareStars(network, machines, alsoTied);
    const machineWords = hasMachines ? `the machines of others ${machines === 'all' ? 'in' : 'out'}` : '';
    const sayAll = (sources: string) => [machineWords, sources].filter(Boolean).join(' and ');
    if (out.size === 0 && !hasBanks) return [{ words: sayAll(''), machines, banks: 'all', out: nothing }];
    return [
      { words: sayAll('the ground sources of others in'), machines, banks: 'all', out: nothing },
      { words: sayAll('the ground sources of others out'), machines, banks: 'project', out },
    ];
  });
}

/**
 * Finds the transformers of others with an earthed star and a delta that can be out by themselves: all but those through which an
 * opened branch, the project, a machine that is in or a node of `alsoTied` is tied to the point of interconnection.
 */
function listSpareStars(
  network: IslandNetwork,
  machines: 'all' | 'project',
  alsoTied: readonly number[],
): ReadonlySet<string> {
  const { model, openings } = network;
  const stars = wiringOf(model).earths.filter(({ branch }) => !branchAt(model, branch).ofProject);
  if (stars.length === 0) return nothing;
  const needed = findNeeded(network, [
    ...model.machines.filter(({ ofProject }) => machines === 'all' || ofProject).map(({ node }) => node),
    ...[...openings.values()].flatMap((index) => [branchAt(model, index).from, branchAt(model, index).to]),
    ...alsoTied,
  ]);
  const spare = stars.filter(({ branch }) => !needed.has(branch));
  return new Set(spare.map(({ branch }) => branchAt(model, branch).id));
}

/** Branches on the ways, fewest branches each, from the point of interconnection to some nodes. */
function findNeeded(network: IslandNetwork, nodes: readonly number[]): ReadonlySet<number> {
  const { model, poi } = network;
  const choice = choiceOfIsland(network, { machines: 'all', project: true, companions: true });
  const inService = [...model.branches.keys()].filter((index) =>
    isInService(model, choice, branchAt(model, index)),
  );
  const joins = [
    ...inService.map((index) => branchAt(model, index)),
    ...model.switches.filter((link) => isClosed(choice, link) && isInService(model, choice, link)),
  ];
  const graph = buildGraph(
    model.nodes.length,
    joins.map(({ from }) => from),
    joins.map(({ to }) => to),
  );
  const cameFrom = new Int32Array(model.nodes.length).fill(-1);
  const cameBy = new Int32Array(model.nodes.length).fill(-1);
  const queue = [poi];
  for (let head = 0; head < queue.length; head++) {
    const u = queue[head]!;
    for (let p = graph.start[u]!; p < graph.start[u + 1]!; p++) {
      const v = graph.neighbour[p]!;
      if (v === poi || cameFrom[v] !== -1) continue;
      cameFrom[v] = u;
      cameBy[v] = graph.edge[p]!;
      queue.push(v);
    }
  }
  const needed = new Set<number>();
  for (const node of nodes) {
    for (let v = node; cameFrom[v] !== -1; v = cameFrom[v]!) {
      const index = inService[cameBy[v]!];
      if (index !== undefined) needed.add(index);
    }
  }
  return needed;
}
