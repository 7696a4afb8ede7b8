import { describe, expect, it } from 'vitest';
import { listFaults } from '../../../support/recompute-step.ts';
import { answersTo, handStudy, phaseVolts } from './reach-studies.ts';

const id = 'phase-reach';

describe('Phase reach', () => {
  it('is the line-to-line current in the device at the end of its zone over the pickup', () => {
    const [finding] = answersTo(id, handStudy());
    // √3·V/(2·4) with Z1 = 2 + 1 + 1; the ground source of the project has no part in it.
    const multiple = (Math.sqrt(3) * phaseVolts) / 8 / 400;
    expect(finding).toMatchObject({
      element: 'CB to end',
      verdict: 'within',
      limit: 2,
      comparison: '>=',
      unit: '',
    });
    expect(finding!.value).toBeCloseTo(multiple, 6);
    expect(finding!.before).toBeCloseTo(multiple, 6);
  });

  it('falls with a machine beyond the device, and is outside where that takes it under the limit', () => {
    const study = handStudy(({ project }) => {
      project!.groundingBanks = [];
      project!.machines = [
        {
          id: 'g',
          node: 'mid',
          kind: 'synchronous',
          kva: 15550.09,
          xSubtransientPu: 0.3,
          neutral: 'ungrounded',
        },
      ];
    });
    const [finding] = answersTo(id, study);
    // The machine is j3 at 12.47 kV: Z1 = (2 + 1)∥3 + 1 = 2.5, and half of the current comes through the breaker.
    expect(finding!.value).toBeCloseTo((Math.sqrt(3) * phaseVolts) / 5 / 2 / 400, 5);
    expect(finding!.before).toBeCloseTo((Math.sqrt(3) * phaseVolts) / 8 / 400, 6);
    expect(finding!.note).toContain('all machines in');
    study.feeder.devices![0]!.phasePickupA = 700;
    expect(answersTo(id, study)[0]).toMatchObject({ verdict: 'outside', consequence: 'study' });
  });

  it('passes exactly the limit where it is inclusive', () => {
    const value = answersTo(id, handStudy())[0]!.value!;
    const verdictAt = (limit: number) =>
      answersTo(id, handStudy(), { limits: [{ limit, comparison: '>=', consequence: 'study' }] })[0]!.verdict;
    expect(verdictAt(value)).toBe('within');
    expect(verdictAt(value * (1 + 1e-12))).toBe('outside');
  });

  it('needs data where the pickup is not known, of each device beside the others', () => {
    const unknown = handStudy(({ feeder }) => delete feeder.devices![0]!.phasePickupA);
    expect(answersTo(id, unknown)).toMatchObject([{ verdict: 'needs-data', element: 'CB' }]);
    const one = handStudy(({ feeder, project }) => {
      project!.node = 'end';
      feeder.devices!.push({ id: 'RC', branch: 'l2', end: 'from', kind: 'recloser' });
    });
    expect(answersTo(id, one)).toMatchObject([
      { element: 'CB to mid', verdict: 'within' },
      { element: 'RC', verdict: 'needs-data' },
    ]);
  });

  it('stops at the last place with two phases', () => {
    const lateral = (phases: string) =>
      handStudy(({ feeder }) => {
        feeder.nodes.push({ id: 'tail', kv: 12.47, phases });
        const z = { z1: { r: 0, x: 1 }, z0: { r: 0, x: 4 } };
        feeder.lines!.push({ id: 'lat', from: 'end', to: 'tail', phases, km: 1, ...z });
      });
    expect(answersTo(id, lateral('B'))[0]!.element).toBe('CB to end');
    const [two] = answersTo(id, lateral('BC'));
    expect(two!.element).toBe('CB to tail');
    // zs − zm = z1 on each of the two phases.
    expect(two!.value).toBeCloseTo((Math.sqrt(3) * phaseVolts) / 10 / 400, 6);
    expect(listFaults(two!.working!)).toEqual([]);
  });

  it('sees through the bank from its high side, with each phase as it is there', () => {
    const study = handStudy(({ feeder }) => {
      feeder.nodes.push({ id: 'grid', kv: 124.7, phases: 'ABC' });
      feeder.sources![0]!.node = 'grid';
      feeder.sources![0]!.min = { z1: { r: 0, x: 100 }, z0: { r: 0, x: 100 } };
      // 10 % of 15.55 MVA at 12.47 kV: j1.
      feeder.transformers = [
        {
          id: 'sub',
          from: 'grid',
          to: 'bus',
          kva: 15550.09,
          connection: 'Dyn1',
          impedancePercent: 10,
          xr: 1e9,
        },
      ];
      feeder.devices!.unshift({ id: 'HV', branch: 'sub', end: 'from', kind: 'breaker', phasePickupA: 100 });
    });
    const [finding] = answersTo(id, study);
    // Line to line beyond a star-delta bank is 2/√3 of the per-unit fault current in one phase of the high side.
    expect(finding!.element).toBe('HV to beside');
    expect(finding!.value).toBeCloseTo(
      (((Math.sqrt(3) * phaseVolts) / 6) * (2 / Math.sqrt(3))) / 10 / 100,
      5,
    );
    expect(listFaults(finding!.working!)).toEqual([]);
    // Its ground element would see nothing of the low side, so none is asked for.
    expect(answersTo('ground-reach', study).some(({ element }) => element?.startsWith('HV'))).toBe(false);
  });

  it('shows working that its printed numbers repeat', () => {
    const study = handStudy(({ feeder, project }) => {
      feeder.inverters = [{ id: 'one', node: 'end', phases: 'A', kva: 300, faultCurrentPu: 1.2 }];
      project!.inverters = [{ id: 'own', node: 'mid', phases: 'ABC', kva: 2000, faultCurrentPu: 1.2 }];
    });
    const [{ working, value, note }] = answersTo(id, study) as [
      Required<ReturnType<typeof answersTo>[number]>,
    ];
    expect(listFaults(working)).toEqual([]);
    expect(working.at(-1)!.result.value).toBeCloseTo(value!, 9);
    expect(note).toMatch(/inverters (not )?feeding/);
  });
});
