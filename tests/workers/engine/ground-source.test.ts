import { describe, expect, it } from 'vitest';
import { judgeGrounding } from '../../../workers/engine/grounding.ts';
import {
  findContinuousNeutralAmps,
  findNeutralDuty,
  sizeGroundBank,
  sizeNeutralReactor,
} from '../../../workers/engine/ground-source.ts';
import { prepareModel } from '../../../workers/engine/prepare-model.ts';
import { solveCase } from '../../../workers/engine/solve-case.ts';
import { choiceOfState } from '../../../workers/engine/states.ts';
import { checkedStudy, readCase } from './cases.ts';

describe('A neutral reactor', () => {
  it('brings X0/X1 to its target', () => {
    const xn = sizeNeutralReactor({ targetX0OverX1: 2.5, x1Ohms: 4, transformerX0Ohms: 4 });
    expect(xn).toBe(2);
    const { x0x1 } = judgeGrounding({ re: 0, im: 4 }, { re: 0, im: 4 }, { re: 0, im: 4 + 3 * xn });
    expect(x0x1).toBe(2.5);
  });

  it('is none where the transformer alone is at the target, or over it', () => {
    expect(sizeNeutralReactor({ targetX0OverX1: 2.5, x1Ohms: 4, transformerX0Ohms: 10 })).toBe(0);
    expect(sizeNeutralReactor({ targetX0OverX1: 2.5, x1Ohms: 4, transformerX0Ohms: 12 })).toBe(0);
  });
});

describe('A grounding bank for inverters', () => {
  // 0.6 per unit of the plant's base, X0/R0 at least 4 (a draft guide, P1547.8; values from memory).
  it.each([
    [1000, 155.501, 93.301],
    [5000, 31.1, 18.66],
  ])('for %d kVA at 12.47 kV has the published size', (plantKva, base, x0) => {
    const size = sizeGroundBank({ kv: 12.47, plantKva });
    expect(size.baseOhms).toBeCloseTo(base, 3);
    expect(size.x0Ohms).toBeCloseTo(x0, 3);
    expect(size.leastX0Ohms).toBeCloseTo(0.9 * x0, 2);
    expect(size.mostX0Ohms).toBeCloseTo(1.1 * x0, 2);
  });

  it('for 5 MVA has at most 4.665 Ω of resistance', () => {
    expect(sizeGroundBank({ kv: 12.47, plantKva: 5000 }).mostR0Ohms).toBeCloseTo(4.665, 3);
  });
});

describe('The neutral of a ground source', () => {
  /** Marrow Lane with a bank of j1 per unit at `poi` as the whole project: Z1 = j0.11, Z0 = j0.14 ∥ j1 there. */
  const study = readCase('marrow-lane');
  study.project = {
    id: 'bank-alone',
    node: 'poi',
    groundingBanks: [{ id: 'own-bank', node: 'poi', z0: { r: 0, x: 15.55009 } }],
  };
  const model = prepareModel(checkedStudy(study));
  const solved = solveCase(model, choiceOfState('after', study));
  const poi = model.nodeIndex.get('poi')!;

  it('carries most for a fault at its own node, with the utility in', () => {
    // I0 = 1/(0.22 + 0.122807) = 2.91709, of which 0.358239 goes through j1; 3·0.358239·462.992 A.
    const duty = findNeutralDuty(solved, poi, { re: 0, im: 1 })!;
    expect(duty.node).toBe('poi');
    expect(duty.amps).toBeCloseTo(497.58, 1);
  });

  it('carries nothing where no ground current can reach it', () => {
    const choice = { ...choiceOfState('after', study), groundingBanks: 'none', sources: 'out' } as const;
    expect(findNeutralDuty(solveCase(model, choice), poi, { re: 0, im: 1 })).toBeUndefined();
  });

  it('carries a standing unbalance all the time', () => {
    const amps = (standingPercent: number) =>
      findContinuousNeutralAmps({ kv: 12.47, z0Ohms: { re: 0, im: 18.66 }, standingPercent });
    expect(amps(3)).toBeCloseTo(34.72, 2);
    expect(amps(1)).toBeCloseTo(34.72 / 3, 2);
  });
});
