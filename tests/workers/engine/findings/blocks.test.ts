import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { Standing } from '../../../../workers/engine/findings/blocks.ts';
import { traceStandings } from '../../../../workers/engine/findings/blocks.ts';
import { buildGraph } from '../../../../workers/engine/graph.ts';

type Edge = [from: number, to: number];

/** The edges of every way from node 0 to a source that meets no node twice, all of them one after the other. */
function listWays(edges: readonly Edge[], sources: ReadonlySet<number>): number[][] {
  const ways: number[][] = [];
  const walk = (node: number, seen: readonly number[], way: readonly number[]) => {
    if (sources.has(node)) {
      ways.push([...way]);
      return;
    }
    edges.forEach(([from, to], edge) => {
      if (from === to || (from !== node && to !== node)) return;
      const next = from === node ? to : from;
      if (!seen.includes(next)) walk(next, [...seen, next], [...way, edge]);
    });
  };
  walk(0, [0], []);
  return ways;
}

function standingsOf(edges: readonly Edge[], sources: ReadonlySet<number>, count: number) {
  const graph = buildGraph(
    count,
    edges.map(([from]) => from),
    edges.map(([, to]) => to),
  );
  const isSource = Uint8Array.from({ length: count }, (_, node) => (sources.has(node) ? 1 : 0));
  const branchOfEdge = Int32Array.from(edges.keys());
  const upstream = { graph, path: [0], branches: [], branchOfEdge, isSource };
  return traceStandings(upstream, new Set(branchOfEdge));
}

describe('How branches stand to the ways to the sources', () => {
  it('is what all ways of any small network say, with parallel lines, loops and several sources', () => {
    const count = 6;
    const node = fc.nat({ max: count - 1 });
    const seen = new Set<Standing>();
    fc.assert(
      fc.property(
        fc.array(fc.tuple(node, node), { maxLength: 9 }),
        fc.uniqueArray(fc.integer({ min: 1, max: count - 1 }), { maxLength: 2 }),
        (edges, places) => {
          const sources = new Set(places);
          const ways = listWays(edges, sources);
          const standings = standingsOf(edges, sources, count);
          edges.forEach((_, edge) => {
            const through = ways.filter((way) => way.includes(edge)).length;
            const apart = through === ways.length ? 'on-every-way' : 'in-a-loop';
            const expected = through === 0 ? 'aside' : apart;
            expect(standings.get(edge) ?? 'aside').toBe(expected);
            seen.add(expected);
          });
        },
      ),
      { seed: 5, numRuns: 2000 },
    );
    expect(seen.size).toBe(3);
  });
});
