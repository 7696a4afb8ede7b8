import { describe, expect, it } from 'vitest';
import { proFormaRuleSet } from '../../../../shared/rules/pro-forma.ts';
import { runStudy } from '../../../../workers/engine/run-study.ts';
import { readCase } from '../cases.ts';
import { ask, closeTie, inverterStudy, limitAt, machineStudy } from './island-studies.ts';

const question = ['effective-grounding'] as const;

const groundedStar = machineStudy(({ project }) => (project.transformers![0]!.connection = 'YNd1'));

describe('Effective grounding', () => {
  it('fails a machine behind a delta when the breaker leaves the substation bank behind', () => {
    const study = machineStudy();
    const [finding] = ask(study, question);
    expect(finding).toMatchObject({ verdict: 'outside', element: 'CB-1', limit: 80, consequence: 'study' });
    expect(finding!.value).toBeCloseTo(105, 9);
    // With the bank still attached the same place looks well grounded, which is why that case does not decide.
    expect(runStudy(study, proFormaRuleSet).grounding!.island!.cogPercent).toBeLessThan(80);
  });

  it('counts two phases to ground where nothing is earthed and the negative sequence is the larger', () => {
    const study = machineStudy(({ project }) => (project.machines![0]!.x2Pu = 0.4));
    const [z1, z2] = [0.2, 0.4].map((x) => (x * 10) / 2);
    const [finding] = ask(study, question);
    // The step-up has 0.06 on 2 MVA: 0.3 on 10. Va = 3·Z2/(Z1 + Z2), over line to line and at 1.05.
    expect(finding!.value).toBeCloseTo(((3 * (z2! + 0.3)) / (z1! + z2! + 0.6) / Math.sqrt(3)) * 105, 6);
    expect(finding!.value).toBeGreaterThan(105);
  });

  it('passes the same machine behind a grounded star with a delta, and shows the ratios', () => {
    const [finding] = ask(groundedStar, question);
    // Z1 = j1.30, Z0 = j0.30: K = −1/2.9, |a² − K| = 0.8798, two lines 0.9/1.9 = 0.4737; 0.8798/√3·1.05.
    expect(finding!.verdict).toBe('within');
    expect(finding!.value).toBeCloseTo(53.337, 2);
    expect(finding!.note).toContain(
      'X0/X1 0.23, R0/X1 0.00 (usually at most 3 and 1, which does not decide)',
    );
  });

  it('passes a value that is exactly the limit where the rule is inclusive, and fails it where it is strict', () => {
    const { value } = ask(groundedStar, question)[0]!;
    expect(ask(groundedStar, question, limitAt(value!))[0]!.verdict).toBe('within');
    expect(ask(groundedStar, question, limitAt(value!, '<'))[0]!.verdict).toBe('outside');
  });

  it('fails by the coefficient though both ratios are kept', () => {
    // Z1 = j1.3, Z0 = 1.25 + j0.42: X0/X1 0.32, R0/X1 0.96.
    const study = machineStudy(({ project }) => {
      project.groundingBanks = [{ id: 'bank', node: 'poi', z0: { r: 1.25 * 15.55009, x: 0.42 * 15.55009 } }];
    });
    const [finding] = ask(study, question);
    expect(finding!.verdict).toBe('outside');
    expect(finding!.note).toContain('X0/X1 0.32, R0/X1 0.96');
  });

  it('takes ground sources of others out where that is worse', () => {
    const study = machineStudy(({ feeder }) => {
      feeder.groundingBanks = [{ id: 'others-bank', node: 'poi', z0: { r: 0, x: 5 } }];
    });
    const [finding] = ask(study, question);
    expect(finding!.value).toBeCloseTo(105, 9);
    expect(finding!.note).toContain('the ground sources of others out');
  });

  it("takes a customer's earthed star out as well, but not the one that the project hangs from", () => {
    const study = machineStudy(({ feeder }) => {
      const [bank] = feeder.transformers!;
      feeder.nodes.push({ id: 'mill', kv: 0.48, phases: 'ABC' });
      feeder.transformers!.push({ ...bank!, id: 'mill-step', from: 'poi', to: 'mill', connection: 'YNd1' });
    });
    expect(ask(study, question)[0]!.value).toBeCloseTo(105, 9);
    const behind = machineStudy(({ feeder, project }) => {
      const [bank] = feeder.transformers!;
      feeder.nodes.push({ id: 'park', kv: 12.47, phases: 'ABC' });
      feeder.transformers!.push({ ...bank!, id: 'park-step', from: 'poi', to: 'park', connection: 'Dyn1' });
      project.node = 'park';
      project.transformers![0]!.from = 'park';
    });
    expect(ask(behind, question)[0]!.verdict).toBe('within');
  });

  it('takes machines of others out where they hold the ratio down, and in where they raise it', () => {
    // Grounded themselves, they ground the island; the project without them does not.
    const helped = machineStudy(({ feeder }) => {
      feeder.machines = [
        {
          id: 'mill',
          node: 'poi',
          kind: 'synchronous',
          kva: 2000,
          xSubtransientPu: 0.2,
          x0Pu: 0.05,
          neutral: 'solid',
        },
      ];
    });
    const [out] = ask(helped, question);
    expect(out!.value).toBeCloseTo(105, 9);
    expect(out!.note).toContain('the machines of others out');
    // Ungrounded ones lower Z1 beside the project's grounded Z0, so X0/X1 rises.
    const hurt = machineStudy(({ feeder, project }) => {
      project.transformers![0]!.connection = 'YNd1';
      feeder.machines = [{ id: 'mill', node: 'poi', kind: 'induction', kva: 20000, xSubtransientPu: 0.17 }];
    });
    const [in_] = ask(hurt, question);
    expect(in_!.note).toContain('the machines of others in');
    expect(in_!.value).toBeGreaterThan(ask(groundedStar, question)[0]!.value!);
  });

  it('leaves what came with the machine of the project in, and takes what came with others out with them', () => {
    const study = machineStudy(({ feeder, project }) => {
      const [step] = project.transformers!;
      const [genset] = project.machines!;
      step!.with = 'genset';
      project.nodes![0]!.with = 'genset';
      feeder.nodes.push({ id: 'mill-lv', kv: 0.48, phases: 'ABC', with: 'mill' });
      feeder.transformers!.push({
        ...step!,
        id: 'mill-step',
        to: 'mill-lv',
        connection: 'YNd1',
        with: 'mill',
      });
      feeder.machines = [{ ...genset!, id: 'mill', node: 'mill-lv' }];
    });
    // The mill's earthed star grounds both; without the mill the project's delta is alone.
    const [finding] = ask(study, question);
    expect(finding!.value).toBeCloseTo(105, 9);
    expect(finding!.note).toContain('the machines of others out');
    expect(finding!.before).toBeLessThan(80);
  });

  it('judges machines of others also where the project has none, and says what they do without it', () => {
    const study = inverterStudy(({ feeder }) => {
      feeder.machines = [{ id: 'mill', node: 'poi', kind: 'induction', kva: 2000, xSubtransientPu: 0.17 }];
    });
    const [finding] = ask(study, question);
    expect(finding).toMatchObject({ verdict: 'outside', element: 'CB-1' });
    expect(finding!.before).toBeCloseTo(105, 9);
  });

  it('looks at every operating case and names the one that decides', () => {
    const study = readCase('fallow-bridge');
    const [finding] = ask({ ...study, project: study.project! }, question);
    expect(finding!.value).toBeCloseTo(105, 9);
    expect(finding!.note).toContain('Of all operating cases');
  });

  it('finds the only operating case that leaves a machine ungrounded', () => {
    // A bank of the project's own, which one scenario has out of service.
    const grounded = machineStudy(({ feeder, project }) => {
      feeder.groundingBanks = [{ id: 'poi-bank', node: 'mid', z0: { r: 0, x: 5 } }];
      project.groundingBanks = [{ id: 'own-bank', node: 'poi', z0: { r: 0, x: 15 } }];
      feeder.scenarios = [{ id: 'reclosed', out: ['poi-bank'] }];
    });
    expect(ask(grounded, question)[0]!.verdict).toBe('within');
    const bare = machineStudy(({ feeder }) => {
      feeder.nodes.push({ id: 'yard', kv: 12.47, phases: 'ABC' });
      feeder.switches = [{ id: 'yard-switch', from: 'poi', to: 'yard', closed: true }];
      feeder.scenarios = [{ id: 'yard-off', switches: { 'yard-switch': false } }];
    });
    bare.project.groundingBanks = [{ id: 'own-bank', node: 'yard', z0: { r: 0, x: 15 } }];
    const [finding] = ask(bare, question);
    expect(finding!.value).toBeCloseTo(105, 9);
    expect(finding!.note).toContain('"yard-off" decides');
  });

  it('does not apply without machines, and says that inverters are another question', () => {
    const [finding] = ask(inverterStudy(), question);
    expect(finding).toMatchObject({ verdict: 'not-applicable', consequence: 'none' });
    expect(finding!.note).toContain('a question of its own');
  });

  it('needs data where no device is known that could cut the project off', () => {
    const study = machineStudy(({ feeder }) => {
      feeder.devices!.forEach((device) => (device.sectionalizing = false));
    });
    expect(ask(study, question)[0]!.verdict).toBe('needs-data');
  });

  it('calls for a study where a closed tie leaves another way to a source', () => {
    const [finding] = ask(machineStudy(closeTie), question);
    expect(finding).toMatchObject({ verdict: 'needs-data', consequence: 'study' });
    expect(finding!.note).toContain('More than one source');
  });
});
