/* Undirected graphs over small integers. */

/** Sets that only ever grow together (union by size, path halving: no recursion, near-constant time). */
export class DisjointSets {
  private readonly parent: Int32Array;
  private readonly size: Int32Array;

  constructor(count: number) {
    this.parent = new Int32Array(count);
    for (let v = 0; v < count; v++) this.parent[v] = v;
    this.size = new Int32Array(count).fill(1);
  }

  find(v: number): number {
    let root = v;
    while (this.parent[root] !== root) {
      this.parent[root] = this.parent[this.parent[root]!]!;
      root = this.parent[root]!;
    }
    return root;
  }

  /** Joins two sets; false when they were one already. */
  join(u: number, v: number): boolean {
    let large = this.find(u);
    let small = this.find(v);
    if (large === small) return false;
    if (this.size[large]! < this.size[small]!) [large, small] = [small, large];
    this.parent[small] = large;
    this.size[large]! += this.size[small]!;
    return true;
  }
}

/** Vertex v meets `neighbour[p]` over edge `edge[p]` for p from start[v] to start[v + 1] - 1. */
export type Graph = { readonly start: Int32Array; readonly neighbour: Int32Array; readonly edge: Int32Array };

/** Lists the edges at each vertex; an edge from a vertex to itself is left out. */
export function buildGraph(count: number, from: ArrayLike<number>, to: ArrayLike<number>): Graph {
  const start = new Int32Array(count + 1);
  for (let e = 0; e < from.length; e++) {
    if (from[e] === to[e]) continue;
    start[from[e]! + 1]!++;
    start[to[e]! + 1]!++;
  }
  for (let v = 0; v < count; v++) start[v + 1]! += start[v]!;
  const filled = start.slice(0, count);
  const neighbour = new Int32Array(start[count]!);
  const edge = new Int32Array(start[count]!);
  for (let e = 0; e < from.length; e++) {
    const u = from[e]!;
    const v = to[e]!;
    if (u === v) continue;
    neighbour[filled[u]!] = v;
    edge[filled[u]!++] = e;
    neighbour[filled[v]!] = u;
    edge[filled[v]!++] = e;
  }
  return { start, neighbour, edge };
}
