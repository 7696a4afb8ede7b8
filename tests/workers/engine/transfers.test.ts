import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { PhaseTriple } from '../../../workers/engine/case.ts';
import type { Complex } from '../../../workers/engine/complex.ts';
import { add, at, subtract, zero } from '../../../workers/engine/complex.ts';
import { currentFromBranch } from '../../../workers/engine/devices.ts';
import { listBoltedFaults } from '../../../workers/engine/faults.ts';
import { reportNode, reportNodes } from '../../../workers/engine/node-results.ts';
import { prepareModel } from '../../../workers/engine/prepare-model.ts';
import { drivingPoint, transferOfPair } from '../../../workers/engine/sequence-networks.ts';
import { findFaultPoint, solveCase } from '../../../workers/engine/solve-case.ts';
import { choiceOfState } from '../../../workers/engine/states.ts';
import { currentInBranch, transfersFrom } from '../../../workers/engine/transfers.ts';
import { readCase } from './cases.ts';
import { denseImpedance } from './dense-solve.ts';
import { randomNetwork } from './random-networks.ts';

const size = ({ re, im }: Complex) => Math.hypot(re, im);
const cases = ['random-11', 'random-12', 'random-13', 'random-14', 'marrow-lane'];

describe('Transfer impedances', () => {
  it('are those of a dense inverse, the same both ways, and the pairs of branches are among them', () => {
    fc.assert(
      fc.property(randomNetwork, (study) => {
        const model = prepareModel(study);
        const solved = solveCase(model, choiceOfState('before', study));
        const { busOf } = solved.topology;
        const ohms = 12.47 ** 2 / study.baseMva;
        const transfers = study.feeder.nodes.map((_, node) => transfersFrom(solved, node));
        for (const sequence of ['z1', 'z0'] as const) {
          const dense = denseImpedance(study, sequence, true);
          transfers.forEach((from, u) => {
            transfers.forEach((to, v) => {
              const got = at(from[sequence], busOf[v]!);
              const wanted = dense[u]![v]!;
              const allowed = 1e-8 * Math.max(size(wanted), size(dense[u]![u]!));
              expect(Math.hypot(got.re * ohms - wanted.re, got.im * ohms - wanted.im)).toBeLessThanOrEqual(
                allowed,
              );
              expect(size(subtract(got, at(to[sequence], busOf[u]!)))).toBeLessThanOrEqual(allowed);
            });
          });
        }
        const { positive } = solved.networks;
        for (const { from, to } of model.branches) {
          const pair = transferOfPair(positive, busOf[from]!, busOf[to]!);
          const wanted = at(transfers[from]!.z1, busOf[to]!);
          expect(size(subtract(pair, wanted))).toBeLessThanOrEqual(1e-9 * size(wanted));
        }
      }),
      { numRuns: 60 },
    );
  });

  it('are refused for two buses that no branch joins', () => {
    const study = readCase('random-11');
    const { networks } = solveCase(prepareModel(study), choiceOfState('before', study));
    const last = networks.positive.hasPath.length - 1;
    const unrelated = networks.positive.trees.parent[last] === 0 ? 1 : 0;
    expect(() => transferOfPair(networks.positive, unrelated, last)).toThrow('joined by a branch');
    expect(drivingPoint(networks.positive, last)).toBeDefined();
  });
});

describe.each(cases)('The current through a branch of %s', (name) => {
  const study = readCase(name);
  const model = prepareModel(study);
  const solved = solveCase(model, choiceOfState('after', study));
  const most = (currents: PhaseTriple) => Math.max(...currents.map(size));

  it('for a fault at its own end is what its device is judged by', () => {
    let compared = 0;
    model.branches.forEach((branch, index) => {
      for (const end of ['from', 'to'] as const) {
        const point = findFaultPoint(solved, branch[end]);
        if (!point) continue;
        const transfers = transfersFrom(solved, branch[end]);
        for (const fault of listBoltedFaults(point, branch.phases)) {
          const got = currentInBranch(solved, transfers, fault, index, end);
          const wanted = currentFromBranch(solved, branch, end, fault);
          got.forEach((current, phase) => {
            expect(size(subtract(current, wanted[phase]!)), `${branch.id} ${end}`).toBeLessThanOrEqual(
              1e-8 * (1 + most(fault.currents)),
            );
          });
          compared++;
        }
      }
    });
    expect(compared).toBeGreaterThan(20);
  });

  it('leaves a line at one end as it enters at the other, wherever the fault is', () => {
    for (let node = 0; node < model.nodes.length; node++) {
      const point = findFaultPoint(solved, node);
      if (!point) continue;
      const transfers = transfersFrom(solved, node);
      for (const fault of listBoltedFaults(point)) {
        model.branches.forEach((branch, index) => {
          if (branch.clockHour !== 0 || branch.zeroSequence.kind !== 'series') return;
          const near = currentInBranch(solved, transfers, fault, index, 'from');
          const far = currentInBranch(solved, transfers, fault, index, 'to');
          near.forEach((current, phase) => {
            expect(size(add(current, far[phase]!))).toBeLessThanOrEqual(1e-9 * (1 + most(fault.currents)));
          });
        });
      }
    }
  });

  it('brings a fault without sources or machines at its node all that it gets', () => {
    const shunts = [...model.sources.map(({ max }) => max), ...model.machines, ...model.groundingBanks];
    const supplied = new Set([...shunts, ...model.inverters].map(({ node }) => node));
    const isJoined = new Set(model.switches.flatMap(({ from, to }) => [from, to]));
    for (let node = 0; node < model.nodes.length; node++) {
      const ends = model.branches.flatMap((branch, index) =>
        (['from', 'to'] as const).filter((end) => branch[end] === node).map((end) => ({ index, end })),
      );
      const point = findFaultPoint(solved, node);
      if (!point || supplied.has(node) || isJoined.has(node)) continue;
      const transfers = transfersFrom(solved, node);
      for (const fault of listBoltedFaults(point)) {
        const total = ends
          .map(({ index, end }) => currentInBranch(solved, transfers, fault, index, end))
          .reduce((sum, each) => [add(sum[0], each[0]), add(sum[1], each[1]), add(sum[2], each[2])], [
            zero,
            zero,
            zero,
          ] as PhaseTriple);
        total.forEach((current, phase) => {
          expect(
            size(subtract(current, fault.currents[phase]!)),
            `${model.nodes[node]!.id} ${fault.kind}`,
          ).toBeLessThanOrEqual(1e-8 * (1 + most(fault.currents)));
        });
      }
    }
  });
});

describe.each(cases)('All nodes of %s reported in one pass', (name) => {
  it('agree with each reported by itself', () => {
    const study = readCase(name);
    const model = prepareModel(study);
    const solve = (state: 'none' | 'before' | 'after' | 'minimum') =>
      solveCase(model, choiceOfState(state, study));
    const states = {
      none: solve('none'),
      before: solve('before'),
      after: solve('after'),
      minimum: solve('minimum'),
    };
    const all = reportNodes(model.nodes, (state) => states[state], true, 0);
    for (const [id, result] of Object.entries(all)) {
      const node = model.nodeIndex.get(id)!;
      for (const state of ['none', 'before', 'after', 'minimum'] as const) {
        const alone = reportNode(states[state], node);
        for (const [key, value] of Object.entries(result[state]!)) {
          const wanted = alone[key as 'threePhase'];
          if (typeof value !== 'number' || wanted === null)
            expect(value, `${id} ${state} ${key}`).toEqual(wanted);
          else
            expect(Math.abs(value - wanted), `${id} ${state} ${key}`).toBeLessThanOrEqual(
              1e-9 * (1 + wanted),
            );
        }
      }
    }
  });
});
