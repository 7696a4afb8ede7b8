import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { NodeState } from '../../../shared/schemas/study-result.ts';
import type { Study } from '../../../shared/schemas/study.ts';
import { reportNode } from '../../../workers/engine/node-results.ts';
import { prepareModel } from '../../../workers/engine/prepare-model.ts';
import { solveCase } from '../../../workers/engine/solve-case.ts';
import type { StateName } from '../../../workers/engine/states.ts';
import { choiceOfState } from '../../../workers/engine/states.ts';
import { denseImpedance } from './dense-solve.ts';
import { randomNetwork } from './random-networks.ts';

const runs = { numRuns: 60 };

function nodesIn(study: Study, state: StateName): Record<string, NodeState> {
  const model = prepareModel(study);
  const solved = solveCase(model, choiceOfState(state, study));
  return Object.fromEntries(study.feeder.nodes.map(({ id }, index) => [id, reportNode(solved, index)]));
}

const kinds = ['threePhase', 'lineGround', 'lineLine', 'lineLineGround', 'lineLineGroundEarth'] as const;

function expectSameCurrents(
  got: Record<string, NodeState>,
  expected: Record<string, NodeState>,
  factor = 1,
): void {
  for (const [id, state] of Object.entries(expected)) {
    for (const kind of kinds) {
      const wanted = state[kind]! * factor;
      expect(Math.abs(got[id]![kind]! - wanted), `${id} ${kind}`).toBeLessThanOrEqual(
        1e-8 * (1 + Math.abs(wanted)),
      );
    }
  }
}

describe('On random networks with loops', () => {
  it('gives the impedances of a dense inverse to 1e-8', () => {
    fc.assert(
      fc.property(randomNetwork, (study) => {
        for (const state of ['none', 'before'] as const) {
          const nodes = nodesIn(study, state);
          for (const sequence of ['z1', 'z0'] as const) {
            const dense = denseImpedance(study, sequence, state === 'before');
            study.feeder.nodes.forEach(({ id }, index) => {
              const { re, im } = dense[index]![index]!;
              const got = nodes[id]![sequence]!;
              expect(Math.hypot(got.r - re, got.x - im)).toBeLessThanOrEqual(1e-8 * Math.hypot(re, im));
            });
          }
        }
      }),
      runs,
    );
  });

  it('gives the same currents when nodes and lines are listed the other way round', () => {
    fc.assert(
      fc.property(randomNetwork, (study) => {
        const { nodes, lines } = study.feeder;
        const turned = {
          ...study,
          feeder: { ...study.feeder, nodes: nodes.toReversed(), lines: lines!.toReversed() },
        };
        expectSameCurrents(nodesIn(turned, 'before'), nodesIn(study, 'before'));
      }),
      runs,
    );
  });

  it('gives the same currents on another base', () => {
    fc.assert(
      fc.property(randomNetwork, fc.double({ min: 0.1, max: 1000, noNaN: true }), (study, baseMva) => {
        expectSameCurrents(nodesIn({ ...study, baseMva }, 'before'), nodesIn(study, 'before'));
      }),
      runs,
    );
  });

  it('gives the same currents when a line is turned round or cut in two', () => {
    fc.assert(
      fc.property(randomNetwork, (study) => {
        const [first, ...rest] = study.feeder.lines!;
        const middle = { id: 'middle', kv: 12.47, phases: 'ABC' };
        const halves = [
          { ...first!, id: 'half', from: first!.to, to: 'middle', km: first!.km * 0.4 },
          { ...first!, from: 'middle', to: first!.from, km: first!.km * 0.6 },
        ];
        const cut = {
          ...study,
          feeder: { ...study.feeder, nodes: [...study.feeder.nodes, middle], lines: [...halves, ...rest] },
        };
        expectSameCurrents(nodesIn(cut, 'before'), nodesIn(study, 'before'));
      }),
      runs,
    );
  });

  it('gives half the current of the sources when all impedances are doubled', () => {
    fc.assert(
      fc.property(randomNetwork, (study) => {
        const twice = (z: { r: number; x: number }) => ({ r: 2 * z.r, x: 2 * z.x });
        const { lines, sources } = study.feeder;
        const doubled: Study = {
          ...study,
          feeder: {
            ...study.feeder,
            lines: lines!.map((line) => ({ ...line, km: 2 * line.km })),
            sources: sources!.map(({ max, ...source }) => ({
              ...source,
              max: { z1: twice(max.z1), z0: twice(max.z0!) },
            })),
          },
        };
        expectSameCurrents(nodesIn(doubled, 'none'), nodesIn(study, 'none'), 0.5);
      }),
      runs,
    );
  });

  // With resistance a machine may turn the angle of Z so that |Z| grows; without, a parallel path only makes it smaller.
  it('never lowers a current of a network without resistance by adding machines', () => {
    fc.assert(
      fc.property(randomNetwork, (study) => {
        const bare = withoutResistance({ ...study, feeder: { ...study.feeder, inverters: [] } });
        const without = nodesIn(bare, 'none');
        for (const [id, state] of Object.entries(nodesIn(bare, 'before'))) {
          for (const kind of ['threePhase', 'lineGround', 'lineLine'] as const) {
            expect(state[kind]!).toBeGreaterThanOrEqual(without[id]![kind]! * (1 - 1e-9));
          }
        }
      }),
      runs,
    );
  });

  it('adds the currents of inverters up: each one raises the voltage by as much alone as with the others', () => {
    fc.assert(
      fc.property(randomNetwork, (study) => {
        const voltages = (inverters: Study['feeder']['inverters']) => {
          const part = { ...study, feeder: { ...study.feeder, inverters } };
          return solveCase(prepareModel(part), choiceOfState('before', part)).openCircuit.v1;
        };
        const none = voltages([]);
        const all = voltages(study.feeder.inverters);
        const single = study.feeder.inverters!.map((inverter) => voltages([inverter]));
        none.re.forEach((re, bus) => {
          const added = single.reduce((total, { re: alone }) => total + alone[bus]! - re, re);
          expect(Math.abs(all.re[bus]! - added)).toBeLessThanOrEqual(1e-9 * Math.abs(added));
        });
      }),
      runs,
    );
  });
});

function withoutResistance(study: Study): Study {
  const reactive = ({ x }: { x: number }) => ({ r: 0, x });
  return {
    ...study,
    feeder: {
      ...study.feeder,
      lines: study.feeder.lines!.map((line) => ({ ...line, z1: reactive(line.z1!), z0: reactive(line.z0!) })),
      sources: study.feeder.sources!.map(({ max, ...source }) => ({
        ...source,
        max: { z1: reactive(max.z1), z0: reactive(max.z0!) },
      })),
    },
  };
}
