import { describe, expect, it } from 'vitest';
import type { Study } from '../../../../shared/schemas/study.ts';
import { listFaults } from '../../../support/recompute-step.ts';
import { answersTo, handStudy, phaseVolts } from './reach-studies.ts';

const id = 'contribution';

function withPlant(connection: string, change: (study: Study) => void = () => {}): Study {
  return handStudy((study) => {
    study.project = {
      id: 'plant',
      node: 'mid',
      nodes: [{ id: 'low', kv: 0.48, phases: 'ABC' }],
      transformers: [
        { id: 'step-up', from: 'mid', to: 'low', kva: 1000, connection, impedancePercent: 6, xr: 1e9 },
      ],
      inverters: [{ id: 'solar', node: 'low', phases: 'ABC', kva: 1000, faultCurrentPu: 1.2 }],
    };
    change(study);
  });
}

describe('Contribution, worked', () => {
  it('shows an inverter behind a grounded wye and delta transformer by its ground current', () => {
    // At `mid` the sources give V/2 three-phase and 3·V/(2 + 2 + 4) line to ground.
    const own = (1000 / (Math.sqrt(3) * 12.47)) * 1.2;
    const [delta] = answersTo(id, withPlant('Dyn1'));
    expect(delta!.value).toBeCloseTo((own / (phaseVolts / 2)) * 100, 3);
    // The transformer earths the feeder with 6 % of 155.5 ohm: j9.33 beside j4 of the zero sequence.
    const z0 = (0.06 * 12.47 ** 2 * 4) / (0.06 * 12.47 ** 2 + 4);
    const [star] = answersTo(id, withPlant('YNd1'));
    const lineGround = (3 * phaseVolts) / (4 + z0);
    const byGround = lineGround * (1 + (own * 2) / phaseVolts) - (3 * phaseVolts) / 8;
    expect(star!.value).toBeCloseTo((byGround / (phaseVolts / 2)) * 100, 3);
    expect(star!.value!).toBeGreaterThan(3 * delta!.value!);
    expect(star!.verdict).toBe('outside');
    expect(star!.note).toMatch(/line to ground [\d.]+ A with sources alone, [\d.]+ A with all/);
  });

  it('takes the sum of what each generator gives by itself where the rule asks for that', () => {
    const study = withPlant('Dyn1', ({ feeder }) => {
      feeder.machines = [
        {
          id: 'mill',
          node: 'end',
          kind: 'synchronous',
          kva: 500,
          xSubtransientPu: 0.2,
          neutral: 'ungrounded',
        },
      ];
    });
    const rated = (kva: number) => kva / (Math.sqrt(3) * 12.47);
    const sum = rated(1000) * 1.2 + rated(500) * 5;
    const [finding] = answersTo(id, study, { parameters: { ownCurrentsSum: true } });
    expect(finding!.value).toBeCloseTo((sum / (phaseVolts / 2)) * 100, 6);
    expect(finding!.before).toBeCloseTo(((rated(500) * 5) / (phaseVolts / 2)) * 100, 6);
    expect(finding!.note).toContain("the sum of each generator's own current");
    expect(answersTo(id, study)[0]!.value).not.toBeCloseTo(finding!.value!, 2);
    expect(listFaults(finding!.working!)).toEqual([]);
  });

  it('shows working that its printed numbers repeat, on a lateral and without inverters too', () => {
    const lateral = handStudy(({ feeder, project }) => {
      feeder.nodes.push({ id: 'tail', kv: 12.47, phases: 'B' });
      const z = { z1: { r: 0, x: 1 }, z0: { r: 0, x: 4 } };
      feeder.lines!.push({ id: 'lat', from: 'end', to: 'tail', phases: 'B', km: 1, ...z });
      project!.node = 'tail';
      project!.groundingBanks = [];
      project!.inverters = [{ id: 'roof', node: 'tail', phases: 'B', kva: 100, faultCurrentPu: 1.2 }];
    });
    for (const study of [withPlant('YNd1'), withPlant('Dyn1'), lateral, handStudy()]) {
      const [{ working, value }] = answersTo(id, study) as [Required<ReturnType<typeof answersTo>[number]>];
      expect(listFaults(working)).toEqual([]);
      expect(working.at(-1)!.result.value).toBeCloseTo(value!, 9);
    }
  });
});

describe('Short-circuit ratio, worked', () => {
  it('shows working that its printed numbers repeat', () => {
    const [finding] = answersTo('short-circuit-ratio', withPlant('Dyn1'));
    // Weakest source j2 and the line's j1 at 12.47 kV, over 1,000 kVA.
    expect(finding!.value).toBeCloseTo(12.47 ** 2 / 3, 6);
    expect(listFaults(finding!.working!)).toEqual([]);
    expect(finding!.working!.at(-1)!.result.value).toBeCloseTo(finding!.value!, 9);
  });
});
