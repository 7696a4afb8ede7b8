import type { Device, Study } from '../../../shared/schemas/study.ts';
import type { CaseChoice, Model, Opening } from '../case.ts';
import { isPresent } from '../case.ts';
import type { Graph } from '../graph.ts';
import { buildGraph } from '../graph.ts';

/* The way from the sources to the point of interconnection, and what lies beyond a device on it. */

export type Upstream = {
  readonly graph: Graph;
  /** Nodes from the point of interconnection to the source that is fewest branches away. */
  readonly path: readonly number[];
  /** The branches along the path, by index in the model. */
  readonly branches: readonly number[];
  /** By edge of the graph: the branch it is, -1 for a closed switch. */
  readonly branchOfEdge: readonly number[];
  readonly isSource: Uint8Array;
};

/** Finds the way from a node to the nearest source; the path is the node alone where there is none. */
export function traceUpstream(model: Model, choice: CaseChoice, node: number): Upstream {
  const from: number[] = [];
  const to: number[] = [];
  const branchOfEdge: number[] = [];
  model.branches.forEach((branch, index) => {
    if (!isPresent(choice, branch)) return;
    from.push(branch.from);
    to.push(branch.to);
    branchOfEdge.push(index);
  });
  for (const link of model.switches) {
    if (!link.closed || !isPresent(choice, link)) continue;
    from.push(link.from);
    to.push(link.to);
    branchOfEdge.push(-1);
  }
  const graph = buildGraph(model.nodes.length, from, to);
  const isSource = new Uint8Array(model.nodes.length);
  for (const source of model.sources) isSource[source.max.node] = 1;

  const cameFrom = new Int32Array(model.nodes.length).fill(-1);
  const cameBy = new Int32Array(model.nodes.length).fill(-1);
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
  const path = [node];
  const branches: number[] = [];
  for (let v = node; cameFrom[v] !== -1; v = cameFrom[v]!) {
    path.push(cameFrom[v]!);
    if (branchOfEdge[cameBy[v]!] !== -1) branches.push(branchOfEdge[cameBy[v]!]!);
  }
  return { graph, path, branches, branchOfEdge, isSource };
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

/** Lists the devices that open by themselves between the sources and the node, outermost first. */
export function listSectionalizing(
  study: Study,
  model: Model,
  upstream: Upstream,
): { device: Device; opening: Opening }[] {
  const distance = new Map(upstream.branches.map((branch, index) => [branch, index]));
  return (study.feeder.devices ?? [])
    .map((device) => ({
      device,
      opening: { branch: model.branchIndex.get(device.branch)!, end: device.end },
    }))
    .filter(({ device, opening }) => isSectionalizing(device) && distance.has(opening.branch))
    .sort((p, q) => distance.get(q.opening.branch)! - distance.get(p.opening.branch)!);
}

function isSectionalizing(device: Device): boolean {
  return device.sectionalizing ?? (device.kind === 'breaker' || device.kind === 'recloser');
}

/**
 * Marks what the node's own bus serves: the node, what closed switches join to it, and what transformers step down from
 * there, as far as it goes.
 */
export function findServedArea({ graph, branchOfEdge }: Upstream, model: Model, node: number): Uint8Array {
  const area = new Uint8Array(model.nodes.length);
  area[node] = 1;
  const kvAtNode = model.nodes[node]!.kv;
  const queue = [node];
  for (let head = 0; head < queue.length; head++) {
    const u = queue[head]!;
    for (let p = graph.start[u]!; p < graph.start[u + 1]!; p++) {
      const v = graph.neighbour[p]!;
      const isSwitch = branchOfEdge[graph.edge[p]!] === -1;
      if (area[v] || !(isSwitch || model.nodes[v]!.kv < kvAtNode)) continue;
      area[v] = 1;
      queue.push(v);
    }
  }
  return area;
}
