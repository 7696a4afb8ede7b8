import { describe, expect, it } from 'vitest';
import { proFormaRuleSet } from '../../../../shared/rules/pro-forma.ts';
import { estimateChange, solveTwoNode } from '../../../../workers/engine/flow/two-node.ts';
import { ask, limitAt } from './island-studies.ts';
import { moveToLateral, voltageStudy } from './voltage-studies.ts';

const question = ['rapid-voltage-change'] as const;

describe('Two nodes', () => {
  /* Checked independently: approximate and exact change in percent. */
  it.each([
    [12.47, 1.2, 2.4, 2, 0, 1.543, 1.475],
    [12.47, 1.2, 2.4, 2, -0.5, 0.772, 0.707],
    [4.16, 0.3, 0.6, 0.5, 0, 0.867, 0.845],
  ])('at %d kV behind %d + j%d ohms with %d MW and %d Mvar', (kv, r, x, p, q, estimate, exact) => {
    const z = { re: r / kv ** 2, im: x / kv ** 2 };
    expect(estimateChange(z, p, q) * 100).toBeCloseTo(estimate, 3);
    expect((solveTwoNode(z, p, q)! - 1) * 100).toBeCloseTo(exact, 3);
  });

  it('have no voltage beyond what the grid can carry', () => {
    expect(solveTwoNode({ re: 0, im: 1 }, 0.49, 0)).toBeDefined();
    expect(solveTwoNode({ re: 0, im: 1 }, 0.51, 0)).toBeUndefined();
  });
});

describe('Rapid voltage change', () => {
  it('is that of two nodes when the project trips, and less for a ramp', () => {
    const [trip, ramp] = ask(voltageStudy(), question);
    expect(trip).toMatchObject({ element: 'poi (tripping)', verdict: 'within', limit: 3 });
    expect(trip!.value).toBeCloseTo(1.475, 3);
    expect(trip!.note).toContain('1.543 % by the estimate');
    expect(ramp!.value).toBeCloseTo((solveTwoNode({ re: 0.007717, im: 0.015434 }, 1.6, 0)! - 1) * 100, 3);
  });

  it('is outside beyond the limit, and keeps one that is exactly met unless the rule is strict', () => {
    const study = voltageStudy(({ project }) => (project.inverters![0]!.kva = 5000));
    const [trip] = ask(study, question);
    expect(trip).toMatchObject({ verdict: 'outside', consequence: 'study' });
    expect(ask(study, question, limitAt(trip!.value!))[0]!.verdict).toBe('within');
    expect(ask(study, question, limitAt(trip!.value!, '<'))[0]!.verdict).toBe('outside');
  });

  it('counts the nameplate, whatever may be exported', () => {
    const study = voltageStudy(({ project }) => (project.inverters![0]!.exportKw = 100));
    expect(ask(study, question)[0]!.value).toBeCloseTo(1.475, 3);
  });

  it('counts vars into the grid as they are, and size where the voltage falls', () => {
    const at = (powerFactor: number) =>
      ask(
        voltageStudy(({ project }) => (project.inverters![0]!.powerFactor = powerFactor)),
        question,
      )[0]!;
    expect(at(0.95).value!).toBeGreaterThan(at(1).value!);
    const absorbing = at(-0.8);
    expect(absorbing.note).toContain('-1200 kvar');
    expect(absorbing.value).toBeGreaterThan(0);
  });

  it('takes the weakest source', () => {
    const study = voltageStudy(({ feeder }) => {
      feeder.sources![0]!.min = { z1: { r: 100, x: 200 }, z0: { r: 100, x: 200 } };
    });
    expect(ask(study, question)[0]!.value!).toBeGreaterThan(2);
  });

  it('takes the worst operating case, and names it', () => {
    const study = voltageStudy(({ feeder }) => {
      feeder.lines!.push({ ...feeder.lines![0]!, id: 'l1b' });
      feeder.scenarios = [{ id: 'one', name: 'One line out', out: ['l1b'] }];
    });
    const [trip] = ask(study, question);
    expect(trip!.note).toContain('"One line out" decides');
    expect(trip!.value).toBeCloseTo(1.475, 3);
  });

  it('asks of energising where the project has a transformer', () => {
    expect(ask(voltageStudy(), question)).toHaveLength(2);
    const study = voltageStudy(({ project }) => {
      project.nodes = [{ id: 'lv', kv: 0.48, phases: 'ABC' }];
      project.transformers = [
        { id: 't', from: 'poi', to: 'lv', kva: 2000, connection: 'Dyn1', impedancePercent: 6, xr: 6 },
      ];
      project.inverters![0]!.node = 'lv';
    });
    const energising = ask(study, question)[2]!;
    // 8 MVA behind 1.2 + j2.4 ohms: X_m = 155.5/8 = 19.438; 1 − 19.438/|1.2 + j21.838| = 11.12 %.
    expect(energising).toMatchObject({ verdict: 'outside', limit: 5, consequence: 'note' });
    expect(energising.value).toBeCloseTo(11.12, 1);
  });

  it('has the wider limit at low voltage', () => {
    const study = voltageStudy(({ feeder, project }) => {
      feeder.nodes.push({ id: 'low', kv: 0.48, phases: 'ABC' });
      feeder.transformers!.push({
        id: 'service',
        from: 'poi',
        to: 'low',
        kva: 2500,
        connection: 'Dyn1',
        impedancePercent: 5,
        xr: 4,
      });
      project.node = 'low';
      project.inverters![0]!.node = 'low';
    });
    expect(ask(study, question)[0]).toMatchObject({
      limit: 5,
      source: expect.stringContaining('low voltage') as string,
    });
  });

  it.each([
    // Per phase 1.2 + j2.4 and 0.9 + j2 and so on to `tap`; the loop of one phase is 2.7 + j6 ohms, of two 3.6 + j7.2 in both.
    ['B', (200e3 / 3 / (12.47e3 / Math.sqrt(3)) ** 2) * 3 * 2.7],
    ['AB', (200e3 / 12.47e3 ** 2) * 3.6],
  ])('on phases %s drives its own loop', (phases, share) => {
    const [trip] = ask(
      voltageStudy((study) => moveToLateral(study, phases)),
      question,
    );
    expect(trip!.value! / 100).toBeCloseTo(share, 3);
  });

  it('takes units on one phase each of two phases as all on one', () => {
    const [trip] = ask(
      voltageStudy((study) => {
        moveToLateral(study, 'AB');
        const [inverter] = study.project.inverters!;
        study.project.inverters = ['A', 'B'].map((phases) => ({
          ...inverter!,
          id: phases,
          phases,
          kva: 100,
        }));
      }),
      question,
    );
    expect(trip!.value! / 100).toBeCloseTo((200e3 / 3 / (12.47e3 / Math.sqrt(3)) ** 2) * 3 * 2.7, 3);
  });

  it('needs data on one phase where a source gives no zero sequence', () => {
    const study = voltageStudy((given) => {
      moveToLateral(given, 'B');
      given.feeder.transformers![0]!.connection = 'Dd0';
    });
    expect(ask(study, question)[0]).toMatchObject({ verdict: 'needs-data', value: null });
  });

  it('is outside where no voltage can be had', () => {
    const study = voltageStudy(({ project }) => (project.inverters![0]!.kva = 200_000));
    expect(ask(study, question)[0]).toMatchObject({ verdict: 'outside', value: null });
  });

  it('does not apply to a project without a generator', () => {
    const study = voltageStudy(({ project }) => delete project.inverters);
    expect(ask(study, question)[0]!.verdict).toBe('not-applicable');
  });

  it('has its numbers in the rule', () => {
    const rule = proFormaRuleSet.rules['rapid-voltage-change'];
    expect(
      ask(voltageStudy(), question, { parameters: { ...rule.parameters, rampShare: 0.5 } })[1]!.value,
    ).toBeLessThan(0.8);
  });
});
