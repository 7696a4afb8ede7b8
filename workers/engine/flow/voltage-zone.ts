import type { Model } from '../case.ts';
import { nodeAt } from '../model-parts.ts';
import type { Upstream } from '../findings/upstream.ts';
import type { Flow } from './solve-flow.ts';

/** Below this a node is low voltage; above, what feeds feeders is a substation's transformer. */
const lowVoltageKv = 1;

/**
 * How many branches, counted from the point of interconnection, lie between it and the substation's bus: up to the first
 * transformer on primary voltage, or up to the source.
 */
export function countToSubstation(model: Model, { path }: Upstream): number {
  for (let k = 0; k + 1 < path.length; k++) {
    const kv = nodeAt(model, path[k]!).kv;
    if (kv > lowVoltageKv && nodeAt(model, path[k + 1]!).kv > kv * 1.2) return k;
  }
  return path.length - 1;
}

/**
 * Lists the nodes whose voltage is judged: all that the same substation's bus feeds, but neither the project's own nor
 * those that came with a generator, where nobody else is served.
 */
export function listJudgedNodes(model: Model, upstream: Upstream, { network }: Flow): number[] {
  const bus = network.placeOf[upstream.path[countToSubstation(model, upstream)]!]!;
  if (bus === -1) return [];
  const isBeyond = new Uint8Array(network.parent.length);
  isBeyond[bus] = 1;
  const nodes: number[] = [];
  for (let place = bus; place < isBeyond.length; place++) {
    const above = network.parent[place]!;
    if (place !== bus && (above === -1 || !isBeyond[above])) continue;
    isBeyond[place] = 1;
    const node = network.nodeOf[place]!;
    const { ofProject, companion } = nodeAt(model, node);
    // The hanging end of a cut is no node of its own.
    if (network.placeOf[node] === place && !ofProject && !companion) nodes.push(node);
  }
  return nodes;
}
