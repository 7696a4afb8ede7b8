import type { Graph } from '../graph.ts';
import { buildGraph } from '../graph.ts';
import type { Upstream } from './upstream.ts';

/*
 * What lies between a node and the sources when lines may be closed to loops. A graph falls into blocks: an edge with no way
 * round it is one by itself, edges that lie on a common loop are one together. Every way from the node to a source goes
 * through the same blocks.
 */

/** How a branch stands to the ways from a node to the sources. */
export type Standing =
  /** No way goes through it. */
  | 'aside'
  /** All ways go through it: opening it cuts the node off. */
  | 'on-every-way'
  /** There is a way through it and one round it. */
  | 'in-a-loop';

/** Tells how branches, by their index in the model, stand to the ways from the path's node to all sources together. */
export function traceStandings(
  upstream: Upstream,
  branches: ReadonlySet<number>,
): ReadonlyMap<number, Standing> {
  const { branchOfEdge, path } = upstream;
  const standings = new Map<number, Standing>();
  const hub = upstream.isSource.indexOf(1);
  if (hub === -1) return standings;
  const { graph, nodeOf } = joinSources(upstream, hub);
  const walk = findBlocks(graph, hub, branchOfEdge.length);
  const isOnWay = new Set<number>();
  for (let v = nodeOf(path[0]!); v !== hub && walk.above[v] !== -1; v = walk.above[v]!) {
    isOnWay.add(walk.blockOf[walk.by[v]!]!);
  }
  branchOfEdge.forEach((branch, edge) => {
    if (!branches.has(branch)) return;
    const block = walk.blockOf[edge]!;
    const standing = walk.sizes[block] === 1 ? 'on-every-way' : 'in-a-loop';
    standings.set(branch, isOnWay.has(block) ? standing : 'aside');
  });
  return standings;
}

/** All sources are one place: to have another source is to have another way. */
function joinSources({ graph, isSource, branchOfEdge }: Upstream, hub: number) {
  const nodeOf = (node: number) => (isSource[node] ? hub : node);
  const isSingle = isSource.indexOf(1, hub + 1) === -1;
  if (isSingle) return { graph, nodeOf };
  const from = new Int32Array(branchOfEdge.length);
  const to = new Int32Array(branchOfEdge.length);
  for (let u = 0; u < isSource.length; u++) {
    for (let p = graph.start[u]!; p < graph.start[u + 1]!; p++) {
      from[graph.edge[p]!] = nodeOf(u);
      to[graph.edge[p]!] = nodeOf(graph.neighbour[p]!);
    }
  }
  return { graph: buildGraph(isSource.length, from, to), nodeOf };
}

/**
 * Finds the blocks of what hangs together with `hub`: Hopcroft and Tarjan, Algorithm 447, Communications of the ACM 16 (1973)
 * 372, without recursion. `above` and `by` are the walk's tree: the node before a node, and the edge from it.
 */
function findBlocks({ start, neighbour, edge }: Graph, hub: number, edgeCount: number) {
  const count = start.length - 1;
  const order = new Int32Array(count);
  const low = new Int32Array(count);
  const above = new Int32Array(count).fill(-1);
  const by = new Int32Array(count).fill(-1);
  const blockOf = new Int32Array(edgeCount).fill(-1);
  const sizes: number[] = [];
  const next = start.slice(0, count);
  const open = new Int32Array(edgeCount);
  const walk = [hub];
  let opened = 0;
  let clock = 1;
  order[hub] = low[hub] = clock;
  const close = (last: number) => {
    let size = 0;
    do {
      blockOf[open[--opened]!] = sizes.length;
      size++;
    } while (open[opened] !== last);
    sizes.push(size);
  };
  while (walk.length > 0) {
    const u = walk.at(-1)!;
    if (next[u]! < start[u + 1]!) {
      const p = next[u]!++;
      const v = neighbour[p]!;
      if (edge[p] === by[u]) continue;
      if (order[v] === 0) {
        order[v] = low[v] = ++clock;
        above[v] = u;
        by[v] = edge[p]!;
        walk.push(v);
      } else if (order[v]! > order[u]!) continue;
      else low[u] = Math.min(low[u]!, order[v]!);
      open[opened++] = edge[p]!;
      continue;
    }
    walk.pop();
    const w = above[u]!;
    if (w === -1) continue;
    low[w] = Math.min(low[w]!, low[u]!);
    if (low[u]! >= order[w]!) close(by[u]!);
  }
  return { above, by, blockOf, sizes };
}
