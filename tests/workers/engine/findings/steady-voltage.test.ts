import { describe, expect, it } from 'vitest';
import { proFormaRuleSet } from '../../../../shared/rules/pro-forma.ts';
import type { Rule } from '../../../../shared/schemas/rule-sets.ts';
import { makeScreening } from '../../../../workers/engine/findings/make-screening.ts';
import { describeVoltageProfile } from '../../../../workers/engine/flow/voltage-profile.ts';
import { ask, limitAt } from './island-studies.ts';
import { moveToLateral, voltageStudy } from './voltage-studies.ts';

const question = ['steady-voltage'] as const;

const parameters = (differs: Rule['parameters']) => ({
  parameters: { ...proFormaRuleSet.rules['steady-voltage'].parameters, ...differs },
});

describe('Steady voltage', () => {
  it('rises at the point of interconnection by what two nodes without load give', () => {
    const study = voltageStudy(({ feeder }) => {
      Object.assign(feeder.loads![0]!, { kw: 0, kvar: 0, minimumKw: 0 });
    });
    const [rise, range] = ask(study, question, parameters({ primaryLowPu: 0.9 }));
    // 12.47 kV, 1.2 + j2.4 ohms, 2 MW: 1.475 % (recomputed independently).
    expect(rise).toMatchObject({ element: 'poi (rise)', verdict: 'within', limit: 3, unit: '%' });
    expect(rise!.value).toBeCloseTo(1.475, 3);
    expect(range).toMatchObject({
      element: 'poi',
      verdict: 'within',
      unit: 'pu',
      comparison: '<=',
      limit: 1.05,
    });
    expect(range!.value).toBeCloseTo(1.01475, 4);
    expect(range!.before).toBeCloseTo(1, 6);
  });

  it('is outside where the rise is more than the limit, and keeps a limit that is exactly met', () => {
    const study = voltageStudy(({ project }) => (project.inverters![0]!.kva = 5000));
    const [rise] = ask(study, question);
    expect(rise).toMatchObject({ verdict: 'outside', consequence: 'study' });
    expect(ask(study, question, limitAt(rise!.value!))[0]!.verdict).toBe('within');
    expect(ask(study, question, limitAt(rise!.value!, '<'))[0]!.verdict).toBe('outside');
  });

  it('counts what may be exported, at the power factor that is set', () => {
    const at = (kw: number, powerFactor: number) =>
      ask(
        voltageStudy(({ project }) => Object.assign(project.inverters![0]!, { exportKw: kw, powerFactor })),
        question,
      )[0]!.value!;
    expect(at(1000, 1)).toBeLessThan(at(2000, 1));
    expect(at(1000, -0.9)).toBeLessThan(at(1000, 1));
    expect(at(1000, 0.9)).toBeGreaterThan(at(1000, 1));
  });

  it('names the node furthest out of range, and the range of services where it is one', () => {
    const study = voltageStudy(({ feeder }) => {
      feeder.nodes.push({ id: 'low', kv: 0.48, phases: 'ABC' });
      feeder.transformers!.push({
        id: 'service',
        from: 'mid',
        to: 'low',
        kva: 300,
        connection: 'Dyn1',
        impedancePercent: 8,
        xr: 4,
      });
      feeder.loads!.push({ id: 'mill', node: 'low', phases: 'ABC', kw: 260, kvar: 200, minimumKw: 10 });
    });
    const [, range, before] = ask(study, question);
    expect(range!.verdict).toBe('within');
    expect(before).toMatchObject({
      element: 'low (out before)',
      verdict: 'outside',
      comparison: '>=',
      limit: 0.95,
    });
    // It is too low already, and the project mends some of that: nothing that a study of the project is for.
    expect(before!.consequence).toBe('note');
    expect(before!.value!).toBeGreaterThan(before!.before!);
    expect(before!.note).toContain('without the project too');
    const wide = ask(study, question, parameters({ serviceLowPu: 0.9 }));
    expect(wide).toHaveLength(2);
    expect(wide[1]!.verdict).toBe('within');
  });

  it('hides no node that the project takes out of range behind one that is further out without it', () => {
    // A tap by the bus that capacitors hold at more than 1.06 with and without; poi goes from 1.04 or less to 1.05 or more.
    const study = voltageStudy(({ feeder, project }) => {
      Object.assign(feeder.sources![0]!, { peakVoltagePu: 1.035, minimumVoltagePu: 1.035 });
      feeder.nodes.push({ id: 'far', kv: 12.47, phases: 'ABC' });
      feeder.lines!.push({ ...feeder.lines![0]!, id: 'l3', from: 'bus', to: 'far', km: 4 });
      feeder.capacitors = [{ id: 'bank-of-cans', node: 'far', phases: 'ABC', kvar: 1800 }];
      project.inverters![0]!.kva = 3500;
    });
    const [, own, standing, ...rest] = ask(study, question);
    expect(own).toMatchObject({ element: 'poi', verdict: 'outside', consequence: 'study', limit: 1.05 });
    expect(own!.before!).toBeLessThan(1.05);
    expect(standing).toMatchObject({
      element: 'far (out before)',
      verdict: 'outside',
      consequence: 'note',
    });
    expect(standing!.value!).toBeGreaterThan(own!.value!);
    expect(rest).toEqual([]);
    const ids = ['voltage-quality', 'steady-voltage', 'rapid-voltage-change', 'listing'] as const;
    expect(ask(study, ids)[0]!.note).toContain('Outside: regulation');
  });

  it('leads to a study where the project is what takes a node out of range', () => {
    const [, range] = ask(voltageStudy(), question, parameters({ primaryHighPu: 1.01 }));
    expect(range).toMatchObject({ element: 'poi', verdict: 'outside', consequence: 'study', limit: 1.01 });
  });

  it('passes a voltage that is exactly the end of the range', () => {
    const [, range] = ask(voltageStudy(), question);
    expect(ask(voltageStudy(), question, parameters({ primaryLowPu: range!.value! }))[1]!.verdict).toBe(
      'within',
    );
  });

  it('takes the rise before regulators have moved, and the range after', () => {
    const study = voltageStudy(({ feeder }) => {
      feeder.regulators = [
        {
          id: 'VR',
          branch: 'l2',
          end: 'to',
          phases: 'ABC',
          setVoltagePu: 1,
          bandwidthPu: 0.0125,
          reverse: 'cogeneration',
        },
      ];
    });
    const [rise, range] = ask(study, question);
    expect(rise!.value).toBeGreaterThan(1.4);
    expect(rise!.note).toContain('before regulators');
    expect(range!.value).toBeLessThan(1.0125);
  });

  it('names a regulator that has no tap left', () => {
    const study = voltageStudy(({ feeder }) => {
      feeder.regulators = [
        {
          id: 'VR',
          branch: 'l2',
          end: 'from',
          phases: 'ABC',
          setVoltagePu: 1.02,
          bandwidthPu: 0.02,
          reverse: 'bidirectional',
        },
      ];
    });
    const [, range] = ask(study, question);
    expect(range).toMatchObject({ verdict: 'outside' });
    expect(range!.note).toContain('Regulator VR stands at its last tap');
  });

  it('is worked out for each operating case, and the worst is named', () => {
    const study = voltageStudy(({ feeder }) => {
      feeder.lines!.push({ ...feeder.lines![0]!, id: 'l1b' });
      feeder.scenarios = [{ id: 'one-line', name: 'One line out', out: ['l1b'] }];
    });
    const [rise] = ask(study, question);
    expect(rise!.note).toContain('"One line out" decides');
    expect(rise!.value).toBeCloseTo(ask(voltageStudy(), question)[0]!.value!, 6);
  });

  it('leaves out a case in which nothing feeds the place, and needs data where that is all there are', () => {
    const dead = (outAlways: boolean) =>
      voltageStudy(({ feeder, project }) => {
        feeder.scenarios = [{ id: 'dark', name: 'Dark', out: ['l2'] }];
        if (!outAlways) return;
        feeder.switches = [{ id: 'gap', from: 'mid', to: 'island', closed: false }];
        feeder.nodes.push({ id: 'island', kv: 12.47, phases: 'ABC' });
        feeder.machines = [
          {
            id: 'm',
            node: 'island',
            kind: 'synchronous',
            kva: 100,
            xSubtransientPu: 0.2,
            neutral: 'ungrounded',
          },
        ];
        project.node = 'island';
        project.inverters![0]!.node = 'island';
      });
    for (const id of ['steady-voltage', 'rapid-voltage-change', 'reverse-flow'] as const) {
      expect(ask(dead(false), [id])[0], id).toMatchObject({ verdict: 'within' });
      expect(ask(dead(true), [id])[0], id).toMatchObject({ verdict: 'needs-data', value: null });
    }
  });

  it('is asked on a lateral too', () => {
    const [rise] = ask(
      voltageStudy((study) => moveToLateral(study, 'B')),
      question,
    );
    expect(rise).toMatchObject({ element: 'tap (rise)', verdict: 'within' });
    expect(rise!.note).toContain('phase B');
  });

  it.each([
    ['loads', (study: ReturnType<typeof voltageStudy>) => delete study.feeder.loads, 'no loads'],
    [
      'a minimum load',
      (study: ReturnType<typeof voltageStudy>) => delete study.feeder.loads![0]!.minimumKw,
      'town',
    ],
  ])('needs data without %s', (_, change, note) => {
    const found = ask(voltageStudy(change), question);
    expect(found).toHaveLength(1);
    expect(found[0]).toMatchObject({ verdict: 'needs-data', value: null, consequence: 'study' });
    expect(found[0]!.note).toContain(note);
  });

  it('gives no number where the load flow does not converge', () => {
    const study = voltageStudy(({ project }) => (project.inverters![0]!.kva = 200_000));
    expect(ask(study, question)[0]).toMatchObject({ verdict: 'needs-data', value: null });
  });

  it('does not apply to a project without a generator', () => {
    const study = voltageStudy(({ project }) => delete project.inverters);
    expect(ask(study, question)[0]!.verdict).toBe('not-applicable');
  });
});

describe('The voltage profile', () => {
  it('goes from the substation to the point of interconnection in four cases', () => {
    const profile = describeVoltageProfile(makeScreening(voltageStudy(), proFormaRuleSet))!;
    expect(profile).toMatchObject({ operatingCase: '', lowPu: 0.975, highPu: 1.05 });
    expect(profile.cases.map(({ name }) => name)).toEqual([
      'minimum-before',
      'minimum-after',
      'peak-before',
      'peak-after',
    ]);
    for (const { points } of profile.cases) {
      expect(points.map(({ node, km }) => [node, km])).toEqual([
        ['bus', 0],
        ['mid', 1],
        ['poi', 2],
      ]);
    }
    const [before, after] = profile.cases.map(({ points }) => points[2]!.voltagePu[0]!);
    const [rise] = ask(voltageStudy(), question);
    expect(after! - before!).toBeLessThanOrEqual(rise!.value! / 100 + 1e-9);
    expect(after! - before!).toBeGreaterThan(0.014);
  });

  it('leaves out phases that are not there and places regulators', () => {
    const study = voltageStudy((given) => {
      moveToLateral(given, 'B');
      given.feeder.regulators = [
        { id: 'VR', branch: 'l2', end: 'from', phases: 'ABC', setVoltagePu: 1, bandwidthPu: 0.02 },
      ];
    });
    const profile = describeVoltageProfile(makeScreening(study, proFormaRuleSet))!;
    expect(profile.regulators).toEqual([{ id: 'VR', km: 1 }]);
    expect(profile.cases[0]!.points.at(-1)!).toMatchObject({ node: 'tap', km: 3 });
    expect(profile.cases[0]!.points.at(-1)!.voltagePu).toEqual([null, expect.any(Number), null]);
  });

  it('is not drawn without loads', () => {
    const study = voltageStudy(({ feeder }) => delete feeder.loads);
    expect(describeVoltageProfile(makeScreening(study, proFormaRuleSet))).toBeUndefined();
  });
});
