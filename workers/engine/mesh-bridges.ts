import type { Graph } from './graph.ts';

/** A walk over a graph in depth, without recursion, that knows which edges are the only way to what they lead to. */
export type Bridges = {
  /** By vertex: its place in the walk. What the walk reached by way of it has the places from there up to `end`. */
  readonly place: Int32Array;
  readonly end: Int32Array;
  /** By vertex: the vertex before it if the edge from there is a bridge, -1 if not. */
  readonly bridgeFrom: Int32Array;
};

/** Finds the bridges among the edges that `passes` lets through (R. E. Tarjan, Inf. Proc. Letters 2 (1974)). */
export function findBridges({ start, neighbour, edge }: Graph, passes: (edge: number) => boolean): Bridges {
  const count = start.length - 1;
  const place = new Int32Array(count).fill(-1);
  const end = new Int32Array(count);
  const bridgeFrom = new Int32Array(count).fill(-1);
  /** The earliest place that an edge leads back to, from the vertex or from any behind it. */
  const reachesBack = new Int32Array(count);
  const cameFrom = new Int32Array(count).fill(-1);
  const cameBy = new Int32Array(count).fill(-1);
  const next = start.slice(0, count);
  let walked = 0;
  const enter = (v: number) => (place[v] = reachesBack[v] = walked++);

  for (let root = 0; root < count; root++) {
    if (place[root] !== -1) continue;
    enter(root);
    for (let u = root; u !== -1;) {
      if (next[u]! < start[u + 1]!) {
        const p = next[u]!++;
        const v = neighbour[p]!;
        if (edge[p] === cameBy[u] || !passes(edge[p]!)) continue;
        if (place[v] !== -1) reachesBack[u] = Math.min(reachesBack[u]!, place[v]!);
        else {
          cameFrom[v] = u;
          cameBy[v] = edge[p]!;
          enter(v);
          u = v;
        }
        continue;
      }
      const before = cameFrom[u]!;
      end[u] = walked;
      if (before !== -1) {
        if (reachesBack[u]! === place[u]) bridgeFrom[u] = before;
        reachesBack[before] = Math.min(reachesBack[before]!, reachesBack[u]!);
      }
      u = before;
    }
  }
  return { place, end, bridgeFrom };
}
