import { describe, expect, it } from 'vitest';
import type { QuestionId, Verdict } from '../../../../shared/schemas/findings.ts';
import type { Answered } from '../../../../workers/engine/findings/judge.ts';
import { makeScreening, type ProjectStudy } from '../../../../workers/engine/findings/make-screening.ts';
import { answerNoConstruction } from '../../../../workers/engine/findings/no-construction.ts';
import { answerTransformerConnection } from '../../../../workers/engine/findings/transformer-connection.ts';
import { answerVoltageQuality } from '../../../../workers/engine/findings/voltage-quality.ts';
import { ask, inverter, plant, rulesFor, study } from './screen-studies.ts';

/* Answers that follow from others, which stand here as they might be. */

type Given = Partial<Record<QuestionId, Verdict | Partial<Answered>[]>>;

function answersFrom(given: Given) {
  return (id: QuestionId): Answered[] => {
    const said = given[id];
    const list = typeof said === 'string' ? [{ verdict: said }] : (said ?? []);
    return list.map((each) => {
      const verdict = each.verdict ?? 'within';
      return {
        ...{ id, question: '', verdict, value: null, comparison: '<=', limit: null, unit: '', source: '' },
        consequence: verdict === 'within' ? 'none' : 'study',
        ...each,
      };
    });
  };
}

const file = plant(100);

describe('Voltage quality', () => {
  const rules = rulesFor('voltage-quality');
  const quality = (given: Given) => answerVoltageQuality(makeScreening(file, rules), answersFrom(given));
  const all: Given = { 'steady-voltage': 'within', 'rapid-voltage-change': 'within', listing: 'within' };

  it('is within where regulation, fluctuation and harmonics are', () => {
    expect(quality(all)).toMatchObject([{ element: 'poi', verdict: 'within', consequence: 'none' }]);
    expect(quality({ ...all, 'rapid-voltage-change': 'not-applicable' })[0]!.verdict).toBe('within');
  });

  it.each([
    ['steady-voltage', 'regulation'],
    ['rapid-voltage-change', 'fluctuation'],
    ['listing', 'harmonics'],
  ] as const)('follows %s', (id, words) => {
    const [outside] = quality({ ...all, [id]: [{ verdict: 'within' }, { verdict: 'outside' }] });
    expect(outside).toMatchObject({ verdict: 'outside', consequence: 'study' });
    expect(outside!.note).toContain(`Outside: ${words}`);
    expect(quality({ ...all, [id]: 'needs-data' })[0]!.verdict).toBe('needs-data');
    expect(quality({ ...all, [id]: [] })[0]!.note).toContain(
      `Not asked by these rules, so not known: ${words}`,
    );
    expect(quality({ ...all, [id]: [] })[0]!.verdict).toBe('needs-data');
  });

  it('is not spoilt by an answer from which no more than a note follows', () => {
    const noted: Given = { ...all, 'rapid-voltage-change': [{ verdict: 'outside', consequence: 'note' }] };
    expect(quality(noted)[0]!.verdict).toBe('within');
    expect(quality(noted)[0]!.note).toBe(
      'Regulation, harmonics: each within its own limit. Fluctuation: outside, but no more than a note follows from it.',
    );
    expect(quality(all)[0]!.note).toBe('Regulation, fluctuation, harmonics: each within its own limit.');
  });

  it('says all that is amiss, the outside first', () => {
    const [finding] = quality({ 'steady-voltage': 'outside', listing: 'needs-data' });
    expect(finding!.verdict).toBe('outside');
    expect(finding!.note).toBe(
      'Outside: regulation. Not known: harmonics. Not asked by these rules, so not known: fluctuation.',
    );
  });

  it('is answered among the rest by the rule set', () => {
    expect(ask(file, 'voltage-quality', rules)[0]!.verdict).toBe('needs-data');
  });
});

describe('New utility facilities', () => {
  const rules = rulesFor('no-construction');
  const facilities = (given: Given, of = file) =>
    answerNoConstruction(makeScreening(of, rules), answersFrom(given));

  it('are none where no answer calls for any', () => {
    const given: Given = {
      'interrupting-duty': 'within',
      service: 'not-applicable',
      contribution: 'outside',
    };
    expect(facilities(given)).toMatchObject([{ element: 'poi', verdict: 'within' }]);
  });

  it('are listed with what calls for them', () => {
    const given: Given = {
      'interrupting-duty': [
        { verdict: 'outside', element: 'RC-1' },
        { verdict: 'within', element: 'CB-1' },
      ],
      'reverse-flow': [{ verdict: 'outside', element: 'bank' }],
    };
    const [finding] = facilities(given);
    expect(finding).toMatchObject({ verdict: 'outside', consequence: 'supplemental' });
    expect(finding!.note).toContain('equipment of a higher rating (RC-1)');
    expect(finding!.note).not.toContain('CB-1');
    expect(finding!.note).toContain('(bank)');
  });

  it("are not called for by the project's own equipment, which is the customer's to replace", () => {
    const own = study(({ project }) => {
      project.devices = [{ id: 'own', branch: 'step-up', end: 'from', kind: 'fuse', interruptingKa: 1 }];
    });
    expect(facilities({ 'interrupting-duty': [{ verdict: 'outside', element: 'own' }] }, own)).toMatchObject([
      { verdict: 'within' },
    ]);
  });

  it('are not called for by a mere note', () => {
    const given: Given = { 'rapid-voltage-change': [{ verdict: 'outside', consequence: 'note' }] };
    expect(facilities(given)[0]!.verdict).toBe('within');
  });

  it('are not known while an answer that may call for them is not', () => {
    const [finding] = facilities({ service: 'needs-data', 'interrupting-duty': 'within' });
    expect(finding!.verdict).toBe('needs-data');
    expect(finding!.note).toContain('service transformer');
  });

  it('are a line to the nearest place with the phases', () => {
    const far = study(({ project, feeder }) => {
      project.nodes!.push({ id: 'site', kv: 12.47, phases: 'ABC' });
      project.lines = [{ ...feeder.lines![0]!, id: 'tap', from: 'poi', to: 'site', km: 0.4 }];
      project.transformers![0]!.from = 'site';
    });
    const [finding] = facilities({}, far);
    expect(finding!.verdict).toBe('outside');
    expect(finding!.note).toContain('0.4 km (tap)');
  });
});

describe('Transformer connection in operating cases', () => {
  const rules = rulesFor('transformer-connection');
  const connection = (of: ProjectStudy, given: Given = {}) =>
    answerTransformerConnection(makeScreening(of, rules), answersFrom(given));

  it('is asked of the circuit that feeds the place then, and names the case', () => {
    const roof = plant(5, { phases: 'A' }, ({ feeder }) => {
      feeder.nodes.push({ id: 'far', kv: 12.47, phases: 'ABC' });
      feeder.lines!.push({ ...feeder.lines![0]!, id: 'l3', from: 'bus', to: 'far', circuit: 'ML-2' });
      feeder.circuits!.push({ id: 'ML-2', lineType: 'three-wire' });
      feeder.switches = [{ id: 'tie', from: 'far', to: 'poi', closed: false }];
      feeder.scenarios = [{ id: 'alternate', switches: { tie: true }, out: ['l2'] }];
    });
    const [finding, ...more] = connection(roof);
    expect(more).toEqual([]);
    expect(finding!.verdict).toBe('outside');
    expect(finding!.note).toContain('"alternate"');
    roof.feeder.circuits![1]!.lineType = 'four-wire';
    expect(connection(roof)[0]!.verdict).toBe('within');
    delete roof.feeder.circuits![1]!.lineType;
    expect(connection(roof)[0]!.verdict).toBe('needs-data');
  });

  it.each([
    ['outside', 'outside'],
    ['needs-data', 'needs-data'],
    ['within', 'within'],
    ['not-applicable', 'within'],
  ] as const)('of a grounded inverter plant follows its own grounding answer: %s', (given, verdict) => {
    const grounded = study(({ project }) => {
      delete project.machines;
      project.transformers![0]!.connection = 'YNd1';
      project.inverters = [inverter('plant', 500, { node: 'lv' })];
    });
    // What is asked of machines does not concern it.
    const answers: Given = { 'inverter-grounding': given, 'effective-grounding': 'outside' };
    expect(connection(grounded, answers)[0]!.verdict).toBe(verdict);
  });

  it.each([
    ['machine', 'inverter-grounding', 'effective-grounding'],
    ['inverter', 'effective-grounding', 'inverter-grounding'],
  ] as const)('of a grounded %s needs data where the rules do not ask how well', (kind, other, own) => {
    const grounded = study(({ project }) => {
      project.transformers![0]!.connection = 'YNd1';
      if (kind === 'machine') return;
      delete project.machines;
      project.inverters = [inverter('plant', 500, { node: 'lv' })];
    });
    expect(connection(grounded, { [other]: 'within' })[0]!.verdict).toBe('needs-data');
    expect(connection(grounded, { [own]: 'within' })[0]!.verdict).toBe('within');
  });

  it('does not apply without a generator', () => {
    const idle = study(({ project }) => delete project.machines);
    expect(connection(idle)[0]!.verdict).toBe('not-applicable');
  });
});
