import type { CaseChoice, Model } from '../case.ts';
import type { Upstream } from '../findings/upstream.ts';
import { traceUpstream } from '../findings/upstream.ts';

/** Makes a finder of every node's way to its source, as `traceUpstream` gives it, after one walk through the network. */
export function traceWays(model: Model, choice: CaseChoice): (node: number) => Upstream {
  const { graph, branchOfEdge, isSource } = traceUpstream(model, choice, 0);
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
