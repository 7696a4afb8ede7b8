import type { JoinedNodes } from './joined-nodes.ts';
import type { Arrays } from './work-arrays.ts';

/*
 * Taking trees off a network leaf by leaf. A vertex keeps only how many edges it has left and the exclusive or of their
 * numbers: at a leaf that is the one edge itself. So no lists of neighbours are needed, and time and memory are linear,
 * also for one long chain.
 */

export type TakenOff = {
  /** Vertices in the order in which they were taken off, laterals before buses. */
  readonly order: Int32Array;
  readonly lateralCount: number;
  readonly count: number;
  /** By vertex: where it hung and by which edge, -1 for what was not taken off. */
  readonly parent: Int32Array;
  readonly parentEdge: Int32Array;
  /** By edge: whether something hung by it. */
  readonly isEdgeTaken: Uint8Array;
};

/** Takes off first the laterals, which leaves them rooted at their taps, then the trees of three-phase groups. */
export function takeTreesOff(
  { groupOf, from, to }: JoinedNodes,
  isThreePhase: Uint8Array,
  arrays: Arrays,
): TakenOff {
  const vertices = groupOf.length;
  const degree = arrays.integers(vertices);
  const edges = arrays.integers(vertices);
  for (let edge = 0; edge < from.length; edge++) {
    const u = from[edge]!;
    const v = to[edge]!;
    if (u === v) continue;
    degree[u]!++;
    degree[v]!++;
    edges[u]! ^= edge;
    edges[v]! ^= edge;
  }
  const order = arrays.integers(vertices);
  const parent = arrays.integers(vertices).fill(-1);
  const parentEdge = arrays.integers(vertices).fill(-1);
  const isEdgeTaken = arrays.bytes(from.length);
  let count = 0;
  const takeAll = (threePhase: number) => {
    for (let first = vertices - 1; first >= 0; first--) {
      for (let v = first; degree[v] === 1 && isThreePhase[v] === threePhase;) {
        const edge = edges[v]!;
        const u = from[edge]! ^ to[edge]! ^ v;
        parent[v] = u;
        parentEdge[v] = edge;
        isEdgeTaken[edge] = 1;
        order[count++] = v;
        degree[v] = 0;
        degree[u]!--;
        edges[u]! ^= edge;
        // What comes later in the scan can wait: the order then stays close to the order of the file.
        if (u < first) break;
        v = u;
      }
    }
  };
  takeAll(0);
  const lateralCount = count;
  takeAll(1);
  return { order, lateralCount, count, parent, parentEdge, isEdgeTaken };
}
