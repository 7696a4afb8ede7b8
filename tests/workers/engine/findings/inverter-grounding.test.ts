import { describe, expect, it } from 'vitest';
import { ask, closeTie, inverterStudy, limitAt, machineStudy, moveToLateral } from './island-studies.ts';

/*
 * By the formulas of IEEE C62.92.6 (method from memory) with Z1 = Z2 = Z_L: K = (Z0 − Z_L)/(Z0 + 2·Z_L), healthy phases
 * I·Z_L·|a² − K| and I·Z_L·|a − K|. The 2 MVA plant over 2 MW beyond RC-1 has I·Z_L = 1.
 */
const question = ['inverter-grounding'] as const;

/** 0.6 per unit of 2 MVA at 12.47 kV. */
const bankOhms = (0.6 * 12.47 ** 2) / 2;

const onDelta =
  (share: number) =>
  ({ feeder }: ReturnType<typeof inverterStudy>) =>
    feeder.sections!.forEach((section) => (section.groundedLoadShare = share));

describe('Grounding with inverters', () => {
  it('finds no rise over I·Z_L where all load is grounded and nothing else is', () => {
    const [finding] = ask(inverterStudy(), question);
    expect(finding).toMatchObject({ verdict: 'within', element: 'RC-1', limit: 138, unit: '%' });
    expect(finding!.value).toBeCloseTo(100, 9);
  });

  it('finds line to line where all load is in delta and nothing is grounded', () => {
    const [finding] = ask(inverterStudy(onDelta(0)), question);
    expect(finding).toMatchObject({ verdict: 'outside', consequence: 'study' });
    expect(finding!.value).toBeCloseTo(100 * Math.sqrt(3), 9);
  });

  it('shows a bank that makes it worse, with and without', () => {
    const study = inverterStudy(({ project }) => {
      project.groundingBanks = [{ id: 'own-bank', node: 'poi', z0: { r: 0, x: bankOhms } }];
    });
    const [finding] = ask(study, question);
    // Z0 = 1 ∥ j0.6.
    expect(finding!.value).toBeCloseTo(113.6881, 3);
    expect(finding!.note).toContain('With bank own-bank 113.7 %, without it 100.0 %: it makes this worse.');
  });

  it('shows a bank that makes it better, and counts on it only where it is the project’s own', () => {
    const bank = { id: 'the-bank', node: 'poi', z0: { r: 0, x: bankOhms } };
    const own = inverterStudy((study) => {
      onDelta(0)(study);
      study.project.groundingBanks = [bank];
    });
    const [within] = ask(own, question);
    // Z0 = j0.6.
    expect(within!.value).toBeCloseTo(128.4853, 3);
    expect(within!.note).toContain('With bank the-bank 128.5 %, without it 173.2 %.');
    const others = inverterStudy((study) => {
      onDelta(0)(study);
      study.feeder.groundingBanks = [bank];
    });
    const [outside] = ask(others, question);
    expect(outside!.verdict).toBe('outside');
    expect(outside!.value).toBeCloseTo(173.2051, 3);
    expect(outside!.note).toContain('With bank the-bank 128.5 %');
  });

  it('counts a bank of others in where that is worse', () => {
    const study = inverterStudy(({ feeder }) => {
      feeder.groundingBanks = [{ id: 'the-bank', node: 'poi', z0: { r: 0, x: bankOhms } }];
    });
    expect(ask(study, question)[0]!.value).toBeCloseTo(113.6881, 3);
  });

  it('counts the earthed star of the step-up', () => {
    const study = inverterStudy(({ project }) => (project.transformers![0]!.connection = 'YNd1'));
    // Z0 = 1 ∥ j0.06.
    expect(ask(study, question)[0]!.value).toBeCloseTo(91.0673, 3);
  });

  it('passes a value that is exactly the limit where the rule is inclusive, and fails it where it is strict', () => {
    const study = inverterStudy(({ feeder }) => (feeder.sections![1]!.minimumKw = 1500));
    const { value } = ask(study, question)[0]!;
    expect(value).toBeCloseTo((2000 / 1500) * 100, 9);
    expect(ask(study, question, limitAt(value!))[0]!.verdict).toBe('within');
    expect(ask(study, question, limitAt(value!, '<'))[0]!.verdict).toBe('outside');
  });

  it('adds what is connected, and says what it does without the project', () => {
    const study = inverterStudy(({ feeder, project }) => {
      feeder.inverters = [{ ...project.inverters![0]!, id: 'there', node: 'poi', kva: 500 }];
    });
    const [finding] = ask(study, question);
    expect(finding!.value).toBeCloseTo(125, 9);
    expect(finding!.before).toBeCloseTo(25, 9);
  });

  it('holds the load of the moment against what the minimum is net of', () => {
    const study = inverterStudy(({ feeder, project }) => {
      feeder.inverters = [{ ...project.inverters![0]!, id: 'there', node: 'poi', kva: 4000 }];
      feeder.sections!.forEach((section) => Object.assign(section, { minimumIs: 'net', netOf: ['there'] }));
      feeder.sections![1]!.minimumKw = 2500;
    });
    // Either 2000 of 2500 kW with it off, or 6000 of 6500 kW with all of it on.
    expect(ask(study, question)[0]!.value).toBeCloseTo((6000 / 6500) * 100, 9);
  });

  it('puts a machine in parallel, in step with the current of the inverters', () => {
    const study = inverterStudy(({ feeder }) => {
      feeder.machines = [{ id: 'mill', node: 'poi', kind: 'induction', kva: 4000, xSubtransientPu: 0.2 }];
      onDelta(0)({ feeder } as never);
    });
    // Beyond RC-1, per unit of 10 MVA: I 0.2, Z_L 5, Zm j0.5, E 1.05: V = 1.05, no ground: √3·V; more than 173.2 without it.
    const [finding] = ask(study, question);
    expect(finding!.value).toBeCloseTo(181.8633, 3);
    expect(finding!.note).toContain('the machines of others in');
  });

  it('takes a unit that forms a grid as a voltage source, and needs data where its impedances are not known', () => {
    const forming = (gridForming: 'unknown' | { z1: { r: number; x: number } }) =>
      inverterStudy(({ project }) => (project.inverters![0]!.gridForming = gridForming));
    const [known] = ask(forming({ z1: { r: 0, x: 0.02 } }), question);
    // Z_L = 5, Z1 = j0.02 ohms at 0.48 kV behind j0.3: j1.168 per unit; the load alone is grounded: Z0 = 5.
    expect(known!.verdict).toBe('outside');
    expect(known!.note).toContain('beside what holds voltage there');
    expect(ask(forming('unknown'), question).map(({ verdict, element }) => [verdict, element])).toEqual([
      ['needs-data', 'CB-1'],
      ['needs-data', 'RC-1'],
    ]);
  });

  it('needs data where the minimum load of one island is not known, though another is within', () => {
    const study = inverterStudy(({ feeder }) => delete feeder.sections![0]!.minimumKw);
    expect(ask(study, question).map(({ verdict, element }) => [element, verdict])).toEqual([
      ['RC-1', 'within'],
      ['CB-1', 'needs-data'],
    ]);
  });

  it('needs data where the grounded share of the load is not known, and reads it from loads that tell', () => {
    const withLoads = (connections: readonly ('wye' | 'delta' | undefined)[]) =>
      inverterStudy(({ feeder }) => {
        feeder.sections!.forEach((section) => delete section.groundedLoadShare);
        feeder.loads = connections.map((connection, index) => ({
          id: `load-${index}`,
          node: 'poi',
          phases: 'ABC',
          kw: 3000,
          kvar: 0,
          minimumKw: 1000,
          ...(connection ? { connection } : {}),
        }));
      });
    expect(ask(withLoads([]), question)[0]!.verdict).toBe('needs-data');
    expect(ask(withLoads(['wye', undefined]), question)[0]!.verdict).toBe('needs-data');
    const [half] = ask(withLoads(['wye', 'delta']), question);
    // Z0 = 2·Z_L: K = 1/4, |a² − K| = 1.1456; two phases to ground 3·2/(1 + 2·2) = 1.2, which is more.
    expect(half!.value).toBeCloseTo(120, 9);
    expect(half!.note).toContain('50 % of it grounded');
  });

  it('needs data where nobody says whether the minimum has other generation taken off', () => {
    const study = inverterStudy(({ feeder, project }) => {
      feeder.inverters = [{ ...project.inverters![0]!, id: 'there', node: 'poi', kva: 100 }];
      delete feeder.sections![1]!.minimumIs;
    });
    expect(ask(study, question).at(-1)).toMatchObject({ verdict: 'needs-data', element: 'RC-1' });
  });

  it('does not apply without inverters', () => {
    expect(ask(machineStudy(), question)[0]!.verdict).toBe('not-applicable');
  });

  it('calls for a study where a closed tie leaves another way to a source', () => {
    expect(ask(inverterStudy(closeTie), question)[0]).toMatchObject({ consequence: 'study' });
  });

  it('judges a one-phase project by the three-phase islands around its lateral, and leaves two phases to a study', () => {
    const one = inverterStudy((study) => moveToLateral(study, 'A'));
    expect(ask(one, question).map(({ element, verdict }) => [element, verdict])).toEqual([
      ['RC-1', 'within'],
    ]);
    const two = inverterStudy((study) => moveToLateral(study, 'AB'));
    expect(ask(two, question).find(({ element }) => element === 'RC-2')!.verdict).toBe('needs-data');
  });

  it('names the operating case that decides', () => {
    const study = inverterStudy(({ feeder, project }) => {
      feeder.loads = [{ id: 'all', node: 'poi', phases: 'ABC', kw: 5000, kvar: 0 }];
      project.groundingBanks = [{ id: 'own-bank', node: 'poi', z0: { r: 0, x: bankOhms } }];
      feeder.sections!.forEach((section) => (section.groundedLoadShare = 0));
      feeder.nodes.push({ id: 'yard', kv: 12.47, phases: 'ABC' });
      feeder.switches = [{ id: 'yard-switch', from: 'poi', to: 'yard', closed: true }];
      feeder.scenarios = [{ id: 'yard-off', switches: { 'yard-switch': false } }];
      project.groundingBanks[0]!.node = 'yard';
    });
    const [finding] = ask(study, question);
    expect(finding!.value).toBeCloseTo(173.2051, 3);
    expect(finding!.note).toContain('"yard-off" decides');
  });
});
