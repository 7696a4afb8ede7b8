import { allPhases } from './case.ts';
import type { JoinedStudy } from './check-references.ts';
import { buildGraph } from './graph.ts';
import { lettersOf } from './phase-letters.ts';
import type { Problems } from './problems.ts';

/**
 * Notes nodes of laterals with phases that what feeds them lacks: a line brings its own, a closed switch those of the node
 * before it. Laterals must be trees.
 */
export function checkSupply(
  { nodes, lines, switches }: JoinedStudy,
  nodePhases: Uint8Array,
  linePhases: Uint8Array,
  problems: Problems,
): void {
  if (nodePhases.every((phases) => phases === allPhases)) return;
  // The core is one vertex; an edge from a vertex to itself joins nothing.
  const core = nodePhases.length;
  const placeOf = (node: number) => (nodePhases[node] === allPhases ? core : node);
  const from = [...lines.from, ...switches.from].map(placeOf);
  const to = [...lines.to, ...switches.to].map(placeOf);
  const lineCount = lines.from.length;
  [...lines.joins, ...switches.joins].forEach((joins, edge) => {
    if (!joins) to[edge] = from[edge]!;
  });
  const { start, neighbour, edge } = buildGraph(core + 1, from, to);

  const queue = new Int32Array(core + 1);
  const isSeen = new Uint8Array(core + 1);
  queue[0] = core;
  isSeen[core] = 1;
  for (let head = 0, tail = 1; head < tail; head++) {
    const place = queue[head]!;
    const phasesHere = place === core ? allPhases : nodePhases[place]!;
    for (let p = start[place]!; p < start[place + 1]!; p++) {
      const next = neighbour[p]!;
      if (isSeen[next]) continue;
      isSeen[next] = 1;
      queue[tail++] = next;
      const given = edge[p]! < lineCount ? linePhases[edge[p]!]! : phasesHere;
      if ((nodePhases[next]! & ~given) === 0) continue;
      problems.add(() => ({
        pointer: nodes.pointer(next, 'phases'),
        got: lettersOf(nodePhases[next]!),
        expected: `phases that its supply has: ${lettersOf(given)}`,
      }));
    }
  }
}
