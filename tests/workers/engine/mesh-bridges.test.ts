import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { Line, Study } from '../../../shared/schemas/study.ts';
import { DisjointSets, buildGraph } from '../../../workers/engine/graph.ts';
import { findBridges } from '../../../workers/engine/mesh-bridges.ts';
import { openingsSeenFrom } from '../../../workers/engine/one-opening.ts';
import { prepareModel } from '../../../workers/engine/prepare-model.ts';
import { findFaultPoint, solveCase } from '../../../workers/engine/solve-case.ts';
import { choiceOfState } from '../../../workers/engine/states.ts';
import { checkedStudy } from './cases.ts';

type Edge = readonly [number, number];

const graph = fc.integer({ min: 2, max: 9 }).chain((count) =>
  fc.record({
    count: fc.constant(count),
    edges: fc.array(fc.tuple(fc.nat(count - 1), fc.nat(count - 1)), { maxLength: 14 }),
    isOpen: fc.array(fc.boolean(), { minLength: 14, maxLength: 14 }),
  }),
);

function reach(count: number, edges: readonly Edge[], from: number): number[] {
  const sets = new DisjointSets(count);
  for (const [u, v] of edges) sets.join(u, v);
  return Array.from({ length: count }, (_, v) => v).filter((v) => sets.find(v) === sets.find(from));
}

describe('The bridges of a graph', () => {
  it('are the edges without which their ends are apart, and the walk knows what lies behind', () => {
    let bridgesSeen = 0;
    fc.assert(
      fc.property(graph, ({ count, edges, isOpen }) => {
        const passes = (edge: number) => !isOpen[edge];
        const found = findBridges(
          buildGraph(
            count,
            edges.map(([u]) => u),
            edges.map(([, v]) => v),
          ),
          passes,
        );
        const there = edges.filter(([u, v], edge) => passes(edge) && u !== v);
        there.forEach(([u, v], index) => {
          const without = there.filter((_, other) => other !== index);
          const isBridge = !reach(count, without, u).includes(v);
          expect(found.bridgeFrom[u] === v || found.bridgeFrom[v] === u).toBe(isBridge);
          if (!isBridge) return;
          bridgesSeen++;
          const child = found.bridgeFrom[u] === v ? u : v;
          const [first, end] = [found.place[child]!, found.end[child]!];
          const behind = Array.from(found.place.keys()).filter(
            (vertex) => found.place[vertex]! >= first && found.place[vertex]! < end,
          );
          expect(behind).toEqual(reach(count, without, child));
        });
      }),
      { numRuns: 300 },
    );
    expect(bridgesSeen).toBeGreaterThan(100);
  });
});

describe('A line between two loops', () => {
  const line = (id: string, from: string, to: string): Line => ({
    id,
    from,
    to,
    phases: 'ABC',
    km: 1,
    z1: { r: 0.2, x: 0.4 },
    z0: { r: 0.4, x: 1.2 },
  });
  const machineAt = (node: string) => ({
    id: `m-${node}`,
    node,
    kind: 'synchronous' as const,
    kva: 500,
    xSubtransientPu: 0.2,
    x0Pu: 0.1,
    neutral: 'solid' as const,
  });
  const withMachinesAt = (...nodes: string[]): Study =>
    checkedStudy({
      format: 'feederwright.study/1',
      frequencyHz: 60,
      baseMva: 10,
      prefaultFactor: { max: 1, min: 1 },
      feeder: {
        nodes: ['a', 'b', 'c', 'd', 'e', 'f'].map((id) => ({ id, kv: 12.47, phases: 'ABC' })),
        sources: [{ id: 's', node: 'a', max: { z1: { r: 0.1, x: 1 }, z0: { r: 0.1, x: 1 } } }],
        lines: [
          ...[line('ab', 'a', 'b'), line('bc', 'b', 'c'), line('ca', 'c', 'a')],
          line('bridge', 'c', 'd'),
          ...[line('de', 'd', 'e'), line('ef', 'e', 'f'), line('fd', 'f', 'd')],
        ],
        machines: nodes.map(machineAt),
      },
    });

  it.each([['on one side', ['b']] as const, ['on both sides', ['b', 'e']] as const])(
    'opened with machines %s alone leaves each place what a new solve finds there',
    (_, nodes) => {
      const study = withMachinesAt(...nodes);
      const model = prepareModel(study);
      const choice = { ...choiceOfState('before', study), sources: 'out' as const };
      const solved = solveCase(model, choice);
      const opening = { branch: model.branchIndex.get('bridge')!, end: 'from' as const };
      const opened = solveCase(model, { ...choice, opened: [opening] });
      for (const [index, { id }] of study.feeder.nodes.entries()) {
        const wanted = findFaultPoint(opened, index);
        const got = openingsSeenFrom(solved, index)(opening);
        expect(got === undefined, id).toBe(wanted === undefined);
        for (const key of ['z1', 'z0'] as const) {
          if (!got || !wanted) continue;
          expect(got[key]!.re, `${id} ${key}`).toBeCloseTo(wanted[key]!.re, 9);
          expect(got[key]!.im, `${id} ${key}`).toBeCloseTo(wanted[key]!.im, 9);
        }
      }
    },
  );
});
