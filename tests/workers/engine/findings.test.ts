import { describe, expect, it } from 'vitest';
import { proFormaRuleSet } from '../../../shared/rules/pro-forma.ts';
import type { Finding, QuestionId } from '../../../shared/schemas/findings.ts';
import type { Rule, RuleSet } from '../../../shared/schemas/rule-sets.ts';
import { listAsked, listNotAsked } from '../../../shared/schemas/rule-sets.ts';
import type { Study } from '../../../shared/schemas/study.ts';
import { runStudy } from '../../../workers/engine/run-study.ts';
import { checkedStudy, readCase } from './cases.ts';

/* The case is worked by hand in its README. */
const marrowLane = readCase('marrow-lane');

function changed(change: (study: Study) => void): Study {
  const study = structuredClone(marrowLane);
  change(study);
  return checkedStudy(study);
}

function answersOf(study: Study, id: QuestionId, ruleSet: RuleSet = proFormaRuleSet): Finding[] {
  return runStudy(study, ruleSet).findings.filter((finding) => finding.id === id);
}

const rulesWith = (id: keyof typeof proFormaRuleSet.rules, rule: Partial<Rule>): RuleSet => ({
  ...proFormaRuleSet,
  rules: { ...proFormaRuleSet.rules, [id]: { ...proFormaRuleSet.rules[id], ...rule } },
});

describe('Findings', () => {
  it('answer every question that is asked, and none of those that are not', () => {
    const answered = new Set(runStudy(marrowLane, proFormaRuleSet).findings.map(({ id }) => id));
    expect([...answered]).toEqual(listAsked(proFormaRuleSet).map(({ id }) => id));
    for (const { id } of listNotAsked(proFormaRuleSet)) expect(answered).not.toContain(id);
  });

  it('cite the limit, the comparison and the clause of the rule set', () => {
    const [finding] = answersOf(marrowLane, 'contribution');
    expect(finding).toMatchObject({ limit: 10, comparison: '<=', unit: '%', source: 'SGIP 2.2.1.4' });
  });

  it('are none without a project', () => {
    const study = changed((file) => delete file.project);
    expect(runStudy(study, proFormaRuleSet).findings).toEqual([]);
  });

  it('pass a value that is exactly the limit where the rule is inclusive, and fail it where it is strict', () => {
    const [measured] = answersOf(marrowLane, 'contribution');
    const limitAt = (comparison: '<=' | '<') =>
      rulesWith('contribution', { limits: [{ limit: measured!.value, comparison, consequence: 'study' }] });
    expect(answersOf(marrowLane, 'contribution', limitAt('<='))[0]!.verdict).toBe('within');
    expect(answersOf(marrowLane, 'contribution', limitAt('<'))[0]).toMatchObject({
      verdict: 'outside',
      consequence: 'study',
    });
  });
});

describe('Contribution', () => {
  it('is the increase of the larger fault current over the larger one without generation', () => {
    const [finding] = answersOf(marrowLane, 'contribution');
    expect(finding).toMatchObject({ verdict: 'within', element: 'poi', consequence: 'none', before: 0 });
    expect(finding!.value).toBeCloseTo(8.4615, 3);
  });

  it('adds inverter currents in magnitude where their phasors would partly cancel', () => {
    const study = changed(({ project }) => {
      delete project!.machines;
      project!.inverters = [
        { id: 'plant', node: 'lv', phases: 'ABC', kva: 2000, faultCurrentPu: 1.2, faultAngleDeg: 0 },
      ];
    });
    // 2 MVA at 1.2 is 0.24 per unit; at `poi` |Z1|·0.24/|Z1| = 0.24 over 9.0909. At 0° the phasor sum adds next to nothing.
    expect(answersOf(study, 'contribution')[0]!.value).toBeCloseTo((0.24 / 9.0909) * 100, 3);
  });

  it('needs data where a source gives no zero-sequence impedance, and the study warns of it', () => {
    const study = changed(({ feeder }) => delete feeder.sources![0]!.max.z0);
    expect(answersOf(study, 'contribution')[0]).toMatchObject({ verdict: 'needs-data', value: null });
    expect(runStudy(study, proFormaRuleSet).warnings.join()).toContain('utility');
  });
});

describe('Interrupting duty', () => {
  it('names the device that is loaded most, with and without the project', () => {
    const findings = answersOf(marrowLane, 'interrupting-duty');
    expect(findings).toHaveLength(1);
    expect(findings[0]).toMatchObject({ element: 'RC-1', verdict: 'within', limit: 87.5 });
    expect(findings[0]!.value).toBeCloseTo(83.055, 2);
    expect(findings[0]!.before).toBeCloseTo(77.165, 2);
  });

  it('lists each device that is outside', () => {
    const study = changed(({ feeder }) => feeder.devices!.forEach((device) => (device.interruptingKa = 5)));
    expect(answersOf(study, 'interrupting-duty').map(({ element, verdict }) => [element, verdict])).toEqual([
      ['CB-1', 'outside'],
      ['RC-1', 'outside'],
    ]);
  });

  it('never passes a device whose rating is not known', () => {
    const study = changed(({ feeder }) => delete feeder.devices![0]!.interruptingKa);
    expect(answersOf(study, 'interrupting-duty').find(({ element }) => element === 'CB-1')!.verdict).toBe(
      'needs-data',
    );
  });

  it("counts the project's own equipment", () => {
    const study = changed(({ project }) => {
      project!.devices = [{ id: 'own', branch: 'step-up', end: 'from', kind: 'fuse', interruptingKa: 1 }];
    });
    expect(answersOf(study, 'interrupting-duty')[0]).toMatchObject({
      element: 'own',
      verdict: 'outside',
      before: null,
    });
  });

  it('needs data where the model names no device', () => {
    const study = changed(({ feeder }) => {
      feeder.devices = [];
      feeder.sections = [];
    });
    expect(answersOf(study, 'interrupting-duty')[0]!.verdict).toBe('needs-data');
  });
});

describe('Effective grounding', () => {
  it('fails a machine behind a delta when the breaker leaves the substation bank behind', () => {
    const [finding] = answersOf(marrowLane, 'effective-grounding');
    expect(finding).toMatchObject({ verdict: 'outside', element: 'CB-1', limit: 80, consequence: 'study' });
    expect(finding!.value).toBeCloseTo(105, 9);
    // With the bank still attached the same place looks well grounded, which is why that case does not decide.
    expect(runStudy(marrowLane, proFormaRuleSet).grounding!.island!.cogPercent).toBeLessThan(80);
  });

  it('passes the same machine behind a grounded star with a delta', () => {
    const study = changed(({ project }) => (project!.transformers![0]!.connection = 'YNd1'));
    const [finding] = answersOf(study, 'effective-grounding');
    // Z1 = j1.30, Z0 = j0.30: X0/X1 0.2308.
    expect(finding!.verdict).toBe('within');
    expect(finding!.note).toContain('X0/X1 0.23');
  });

  it('takes the worse of the project alone and everyone together', () => {
    const study = changed(({ feeder }) => {
      feeder.groundingBanks = [{ id: 'others-bank', node: 'poi', z0: { r: 0, x: 5 } }];
    });
    expect(answersOf(study, 'effective-grounding')[0]!.value).toBeCloseTo(105, 9);
  });

  it('does not apply without machines, and says that inverters are another question', () => {
    const study = changed(({ project }) => {
      delete project!.machines;
      project!.inverters = [{ id: 'plant', node: 'lv', phases: 'ABC', kva: 2000, faultCurrentPu: 1.2 }];
    });
    const [finding] = answersOf(study, 'effective-grounding');
    expect(finding).toMatchObject({ verdict: 'not-applicable', consequence: 'none' });
    expect(finding!.note).toContain('a question of its own');
  });

  it('needs data where no device is known that could cut the project off', () => {
    const study = changed(({ feeder }) => {
      feeder.devices!.forEach((device) => (device.sectionalizing = false));
    });
    expect(answersOf(study, 'effective-grounding')[0]!.verdict).toBe('needs-data');
  });
});

describe('Transformer connection and line type', () => {
  const verdict = (change: (study: Study) => void) =>
    answersOf(changed(change), 'transformer-connection')[0]!.verdict;
  const lateral = (study: Study, phases: string) => {
    study.feeder.nodes.push({ id: 'tap', kv: 12.47, phases });
    const [first] = study.feeder.lines!;
    study.feeder.lines!.push({ ...first!, id: 'l3', from: 'poi', to: 'tap', phases });
    study.project = {
      id: 'roof',
      node: 'tap',
      inverters: [{ id: 'roof-inverter', node: 'tap', phases, kva: 10, faultCurrentPu: 1.2 }],
    };
  };

  it('fails a project that is no ground source on a four-wire line', () => {
    expect(answersOf(marrowLane, 'transformer-connection')[0]).toMatchObject({
      verdict: 'outside',
      value: null,
    });
  });

  it('passes an effectively grounded one', () => {
    expect(verdict(({ project }) => (project!.transformers![0]!.connection = 'YNd1'))).toBe('within');
  });

  it('passes a three-phase project on a three-wire line, whatever its connection', () => {
    expect(verdict(({ feeder }) => (feeder.circuits![0]!.lineType = 'three-wire'))).toBe('within');
  });

  it('passes line to neutral on four wires and fails phase to phase there', () => {
    expect(verdict((study) => lateral(study, 'A'))).toBe('within');
    expect(verdict((study) => lateral(study, 'AB'))).toBe('outside');
  });

  it('passes phase to phase on three wires and fails line to neutral there', () => {
    const threeWire = (study: Study) => (study.feeder.circuits![0]!.lineType = 'three-wire');
    expect(verdict((study) => (lateral(study, 'AB'), threeWire(study)))).toBe('within');
    expect(verdict((study) => (lateral(study, 'A'), threeWire(study)))).toBe('outside');
  });

  it('needs data where the line type is not known', () => {
    expect(verdict(({ feeder }) => delete feeder.circuits)).toBe('needs-data');
  });
});

describe('Short-circuit ratio', () => {
  it('is the fault power of the weakest source over the size of the project', () => {
    const [finding] = answersOf(marrowLane, 'short-circuit-ratio');
    expect(finding!.value).toBeCloseTo(45.4545, 3);
    expect(finding!.verdict).toBe('within');
  });

  it.each([
    [10, 'outside', 'note', 20],
    [20, 'outside', 'study', 5],
  ] as const)('with %d MVA is %s, with consequence %s', (mva, verdict, consequence, limit) => {
    const study = changed(({ project }) => (project!.machines![0]!.kva = mva * 1000));
    expect(answersOf(study, 'short-circuit-ratio')[0]).toMatchObject({ verdict, consequence, limit });
  });

  it('counts the inverters that are at the place already', () => {
    const study = changed(({ feeder }) => {
      feeder.inverters = [
        { id: 'there', node: 'poi', phases: 'ABC', kva: 3000, faultCurrentPu: 1.2 },
        { id: 'elsewhere', node: 'mid', phases: 'ABC', kva: 9000, faultCurrentPu: 1.2 },
      ];
    });
    expect(answersOf(study, 'short-circuit-ratio')[0]!.value).toBeCloseTo(90.909 / 5, 3);
  });
});

describe('Section peak load', () => {
  it('takes the worst of the nested sections', () => {
    const [finding] = answersOf(marrowLane, 'section-peak-load');
    expect(finding).toMatchObject({ element: 'outer', value: 25, before: 0, verdict: 'outside' });
  });

  it('counts what is connected beyond the device, and not what is before it', () => {
    const study = changed(({ feeder }) => {
      feeder.inverters = [
        { id: 'beyond', node: 'poi', phases: 'ABC', kva: 400, faultCurrentPu: 1.2 },
        { id: 'nearer', node: 'mid', phases: 'ABC', kva: 8000, faultCurrentPu: 1.2 },
      ];
    });
    const [finding] = answersOf(study, 'section-peak-load');
    // Beyond CB-1 (400 + 8000 + 2000)/10,000 = 104 %; beyond RC-1 (400 + 2000)/8000 = 30 %.
    expect(finding).toMatchObject({ element: 'whole', value: 104, before: 84 });
  });

  it('counts what may be exported where the rule set says so', () => {
    const study = changed(({ project }) => (project!.machines![0]!.exportKw = 800));
    const rules = rulesWith('section-peak-load', { sizeBasis: 'export' });
    expect(answersOf(study, 'section-peak-load', rules)[0]!.value).toBe(10);
  });

  it('needs data for a section without a known peak, even where another one is within', () => {
    const study = changed(({ feeder, project }) => {
      project!.machines![0]!.kva = 100;
      delete feeder.sections![0]!.peakKw;
    });
    expect(answersOf(study, 'section-peak-load').map(({ element, verdict }) => [element, verdict])).toEqual([
      ['outer', 'within'],
      ['whole', 'needs-data'],
    ]);
  });

  it('needs data where a closed tie gives the section another way to the source', () => {
    const study = changed(({ feeder }) => {
      feeder.switches = [{ id: 'tie', from: 'bus', to: 'poi', closed: true }];
    });
    expect(answersOf(study, 'section-peak-load').every(({ verdict }) => verdict === 'needs-data')).toBe(true);
  });

  it('leads to a study behind a closed tie, whatever the rule says of a peak that is not known', () => {
    const rules = rulesWith('section-peak-load', {
      limits: [{ limit: 15, comparison: '<=', consequence: 'supplemental' }],
    });
    const tied = changed(({ feeder }) => {
      const [line] = feeder.lines!;
      feeder.nodes.push(...['a', 'b'].map((id) => ({ id, kv: 12.47, phases: 'ABC' })));
      feeder.lines!.push({ ...line!, id: 'a', to: 'a' }, { ...line!, id: 'b', from: 'a', to: 'b' });
      feeder.switches = [{ id: 'tie', from: 'b', to: 'poi', closed: true }];
    });
    const consequences = answersOf(tied, 'section-peak-load', rules).map(({ consequence }) => consequence);
    expect(consequences).toEqual(['study', 'study']);
    const unknown = changed(({ feeder }) => delete feeder.sections![0]!.peakKw);
    const lacking = answersOf(unknown, 'section-peak-load', rules).find(({ element }) => element === 'whole');
    expect(lacking!.consequence).toBe('supplemental');
  });
});
