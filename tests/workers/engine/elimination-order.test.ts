import { describe, expect, it } from 'vitest';
import { orderByMinimumDegree } from '../../../workers/engine/elimination-order.ts';
import { analyseStructure } from '../../../workers/engine/factorization.ts';
import { buildGraph } from '../../../workers/engine/graph.ts';

function structureOf(count: number, edges: readonly (readonly [number, number])[]) {
  const graph = buildGraph(
    count,
    edges.map(([from]) => from),
    edges.map(([, to]) => to),
  );
  const order = orderByMinimumDegree(graph);
  return { order: [...order], entries: analyseStructure(graph, order).rows.length };
}

const range = (count: number) => Array.from({ length: count }, (_, index) => index);

describe('the order of elimination', () => {
  it('takes each bus once and joins two neighbours for each bus of a ring but the last three', () => {
    const count = 50;
    const { order, entries } = structureOf(
      count,
      range(count).map((v) => [v, (v + 1) % count]),
    );
    expect(order.toSorted((u, v) => u - v)).toEqual(range(count));
    expect(entries).toBe(count + (count - 3));
  });

  it('joins two hubs once when all paths between them are taken out, also where their lists are long', () => {
    const paths = 100;
    const { order, entries } = structureOf(
      paths + 2,
      range(paths).flatMap((path) => [[0, path + 2] as const, [path + 2, 1] as const]),
    );
    expect(order.toSorted((u, v) => u - v)).toEqual(range(paths + 2));
    expect(entries).toBe(2 * paths + 1);
  });

  it('leaves no bus that was taken out in the list of a hub, when it is the hub of a wheel', () => {
    const rim = 60;
    const { order, entries } = structureOf(
      rim + 1,
      range(rim).flatMap((v) => [[rim, v] as const, [v, (v + 1) % rim] as const]),
    );
    expect(order.toSorted((u, v) => u - v)).toEqual(range(rim + 1));
    // Every bus of the rim meets the hub and two of the rim, until three are left.
    expect(entries).toBe(3 * (rim - 3) + 6);
  });
});
