import type { Device, Study } from '../../../shared/schemas/study.ts';
import type { CaseChoice, Model, Opening } from '../case.ts';
import { isClosed, isInService, isPresent } from '../case.ts';
import type { Graph } from '../graph.ts';
import { buildGraph } from '../graph.ts';
import { listEdges, listPresentNodes } from '../joined-nodes.ts';
import { nodeAt } from '../model-parts.ts';
import { wiringOf } from '../wiring.ts';
import { newArrays } from '../work-arrays.ts';

/* The way from the sources to the point of interconnection, and what lies beyond a device on it. */

export type Upstream = {
  readonly graph: Graph;
  /** Nodes from the point of interconnection to the source that is fewest branches away. */
  readonly path: readonly number[];
  /** The branches along the path, by index in the model. */
  readonly branches: readonly number[];
  /** By edge of the graph: the branch it is, -1 for a closed switch. */
  readonly branchOfEdge: Int32Array;
  readonly isSource: Uint8Array;
};

/** Finds the way from a node to the nearest source; the path is the node alone where there is none. */
export function traceUpstream(model: Model, choice: CaseChoice, node: number): Upstream {
  return traceWays(model, choice)(node);
}

/** Makes a finder of every node's way to its source, as `traceUpstream` gives it, after one walk through the network. */
export function traceWays(model: Model, choice: CaseChoice): (node: number) => Upstream {
  const links = model.switches
    .filter((link) => isClosed(choice, link) && isInService(model, choice, link))
    .map((link): [number, number] => [link.from, link.to]);
  const { from, to } = listEdges(model, choice, listPresentNodes(model, choice, newArrays), links, newArrays);
  const branchOfEdge = from.map((_, edge) => (edge < from.length - links.length ? edge : -1));
  const count = wiringOf(model).nodeFlags.length;
  const graph = buildGraph(count, from, to);
  const isSource = new Uint8Array(count);
  for (const { max } of model.sources) if (isPresent(choice, max)) isSource[max.node] = 1;

  const cameFrom = new Int32Array(count).fill(-1);
  const cameBy = new Int32Array(count).fill(-1);
  const queue: number[] = [];
  isSource.forEach((yes, index) => yes && queue.push(index));
  for (let head = 0; head < queue.length; head++) {
    const u = queue[head]!;
    for (let p = graph.start[u]!; p < graph.start[u + 1]!; p++) {
      const v = graph.neighbour[p]!;
      if (isSource[v] || cameFrom[v] !== -1) continue;
      cameFrom[v] = u;
      cameBy[v] = graph.edge[p]!;
      queue.push(v);
    }
  }
  return (node) => {
    const path = [node];
    const branches: number[] = [];
    for (let v = node; cameFrom[v] !== -1; v = cameFrom[v]!) {
      path.push(cameFrom[v]!);
      const branch = branchOfEdge[cameBy[v]!]!;
      if (branch !== -1) branches.push(branch);
    }
    return { graph, path, branches, branchOfEdge, isSource };
  };
}

/** Marks the nodes that stay with `node` when a branch is opened; nothing where a source stays with it too. */
export function findCutOff(
  { graph, branchOfEdge, isSource }: Upstream,
  node: number,
  branch: number,
): Uint8Array | undefined {
  const reached = new Uint8Array(isSource.length);
  reached[node] = 1;
  const queue = [node];
  for (let head = 0; head < queue.length; head++) {
    const u = queue[head]!;
    if (isSource[u]) return undefined;
    for (let p = graph.start[u]!; p < graph.start[u + 1]!; p++) {
      const v = graph.neighbour[p]!;
      if (reached[v] || branchOfEdge[graph.edge[p]!] === branch) continue;
      reached[v] = 1;
      queue.push(v);
    }
  }
  return reached;
}

/** What opening each branch of the path cuts off. */
export type Cuts = {
  /** By branch of the path: whether opening it leaves the node without any source. */
  readonly isCut: Uint8Array;
  /** By node: the first branch of the path whose opening cuts it off together with the path's node; -1 beyond all. */
  readonly since: Int32Array;
};

/**
 * Finds what stays with the path's node when its branches are opened one at a time. What one opening cuts off is part of what
 * the next one further out does, so that a single walk outwards finds all.
 */
export function traceCuts({ graph, path, branches, branchOfEdge, isSource }: Upstream): Cuts {
  const placeOf = new Map(branches.map((branch, place) => [branch, place]));
  const isCut = new Uint8Array(branches.length);
  const since = new Int32Array(isSource.length).fill(-1);
  const beyond = new Int32Array(branches.length).fill(-1);
  const queue = [path[0]!];
  since[path[0]!] = 0;
  let hasSource = false;
  let furthest = -1;
  for (let place = 0, head = 0; place < branches.length; place++) {
    for (; head < queue.length; head++) {
      const u = queue[head]!;
      if (isSource[u]) hasSource = true;
      for (let p = graph.start[u]!; p < graph.start[u + 1]!; p++) {
        const v = graph.neighbour[p]!;
        const onPath = placeOf.get(branchOfEdge[graph.edge[p]!]!) ?? -1;
        furthest = Math.max(furthest, onPath);
        if (onPath >= place && since[v] === -1) beyond[onPath] = v;
        else if (since[v] === -1) {
          since[v] = place;
          queue.push(v);
        }
      }
    }
    const next = beyond[place]!;
    if (next === -1 || since[next] !== -1) continue;
    // Where the path beyond was reached another way, so is its source.
    isCut[place] = hasSource || furthest > place ? 0 : 1;
    since[next] = place + 1;
    queue.push(next);
  }
  return { isCut, since };
}

/** Lists the devices that open by themselves between the sources and the node, outermost first, with their branch's place on the path. */
export function listSectionalizing(
  study: Study,
  model: Model,
  upstream: Upstream,
): { device: Device; opening: Opening; place: number }[] {
  const distance = new Map(upstream.branches.map((branch, index) => [branch, index]));
  return (study.feeder.devices ?? [])
    .map((device) => {
      const branch = model.branchIndex.get(device.branch)!;
      return { device, opening: { branch, end: device.end }, place: distance.get(branch) ?? -1 };
    })
    .filter(({ device, place }) => place !== -1 && isSectionalizing(device))
    .sort((p, q) => q.place - p.place);
}

export function isSectionalizing(device: Device): boolean {
  return device.sectionalizing ?? (device.kind === 'breaker' || device.kind === 'recloser');
}

/**
 * Marks what the node's own bus serves: the node, what closed switches join to it, and what transformers step down from
 * there, as far as it goes.
 */
export function findServedArea({ graph, branchOfEdge }: Upstream, model: Model, node: number): Uint8Array {
  const area = new Uint8Array(graph.start.length - 1);
  area[node] = 1;
  const kvAtNode = nodeAt(model, node).kv;
  const queue = [node];
  for (let head = 0; head < queue.length; head++) {
    const u = queue[head]!;
    for (let p = graph.start[u]!; p < graph.start[u + 1]!; p++) {
      const v = graph.neighbour[p]!;
      const isSwitch = branchOfEdge[graph.edge[p]!] === -1;
      if (area[v] || !(isSwitch || nodeAt(model, v).kv < kvAtNode)) continue;
      area[v] = 1;
      queue.push(v);
    }
  }
  return area;
}
