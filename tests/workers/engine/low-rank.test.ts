import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { CaseChoice } from '../../../workers/engine/case.ts';
import { allPhases } from '../../../workers/engine/case.ts';
import type { Complex } from '../../../workers/engine/complex.ts';
import { subtract } from '../../../workers/engine/complex.ts';
import type { FaultPoint } from '../../../workers/engine/faults.ts';
import { addShunts } from '../../../workers/engine/low-rank.ts';
import { openingsSeenFrom } from '../../../workers/engine/one-opening.ts';
import { prepareModel } from '../../../workers/engine/prepare-model.ts';
import { findFaultPoint, solveCase } from '../../../workers/engine/solve-case.ts';
import { choiceOfState } from '../../../workers/engine/states.ts';
import { readCase } from './cases.ts';
import { randomNetwork } from './random-networks.ts';

const size = ({ re, im }: Complex) => Math.hypot(re, im);

function expectSamePoint(got: FaultPoint | undefined, wanted: FaultPoint | undefined, what: string): void {
  expect(got === undefined, what).toBe(wanted === undefined);
  if (!got || !wanted) return;
  for (const key of ['z1', 'z2', 'z0'] as const) {
    expect(got[key] === null, `${what} ${key}`).toBe(wanted[key] === null);
    if (got[key] && wanted[key]) {
      expect(size(subtract(got[key], wanted[key])), `${what} ${key}`).toBeLessThanOrEqual(
        1e-7 * size(wanted[key]),
      );
    }
  }
  got.voltage.forEach((voltage, phase) => {
    expect(size(subtract(voltage, wanted.voltage[phase]!)), what).toBeLessThanOrEqual(1e-8);
  });
}

describe('Machines added to a solved case', () => {
  it('change every place as a new solve does, inverter currents included', () => {
    const machine = fc.record({ at: fc.nat(), kva: fc.double({ min: 50, max: 5000, noNaN: true }) });
    fc.assert(
      fc.property(randomNetwork, fc.array(machine, { minLength: 1, maxLength: 3 }), (study, machines) => {
        const count = study.feeder.nodes.length;
        const project = {
          id: 'p',
          node: 'n0',
          machines: machines.map(({ at, kva }, index) => ({
            id: `p${index}`,
            node: `n${at % count}`,
            kind: 'synchronous' as const,
            kva,
            xSubtransientPu: 0.2,
            x2Pu: 0.25,
            x0Pu: 0.1,
            neutral: 'solid' as const,
          })),
        };
        const model = prepareModel({ ...study, project });
        const before = solveCase(model, choiceOfState('before', study));
        const after = solveCase(model, choiceOfState('after', study));
        const updated = addShunts(
          before,
          model.machines.filter(({ ofProject }) => ofProject),
        );
        for (let node = 0; node < count; node++) {
          expectSamePoint(updated!.findPoint(node), findFaultPoint(after, node), `n${node}`);
        }
      }),
      { numRuns: 60 },
    );
  });

  it('are left to a new solve where they make the first path to earth', () => {
    const study = readCase('marrow-lane');
    const model = prepareModel(study);
    const solved = solveCase(model, { ...choiceOfState('none', study), sources: 'out' });
    expect(addShunts(solved, [model.machines[0]!])).toBeUndefined();
  });
});

describe.each(['random-11', 'random-12', 'random-13', 'random-14', 'marrow-lane'])(
  'One branch opened in %s',
  (name) => {
    const study = readCase(name);
    const model = prepareModel(study);
    const choices: Record<string, CaseChoice> = {
      'with all sources': { ...choiceOfState('after', study), inverters: 'none' },
      'without sources': { ...choiceOfState('after', study), inverters: 'none', sources: 'out' },
    };

    it.each(Object.keys(choices))('changes every place as a new solve does, %s', (which) => {
      const choice = choices[which]!;
      const solved = solveCase(model, choice);
      const laterals = model.branches.filter(({ phases }) => phases !== allPhases);
      const finders = model.nodes.map((_, node) => openingsSeenFrom(solved, node));
      for (let branch = 0; branch < model.branches.length; branch++) {
        // Laterals are solved anew: one of them stands for all.
        if (laterals.indexOf(model.branches[branch]!) > 0) continue;
        for (const end of ['from', 'to'] as const) {
          const opened = solveCase(model, { ...choice, opened: [{ branch, end }] });
          finders.forEach((findPoint, node) => {
            const what = `${model.nodes[node]!.id}, ${model.branches[branch]!.id} open at ${end}`;
            expectSamePoint(findPoint({ branch, end }), findFaultPoint(opened, node), what);
          });
        }
      }
    });
  },
);
