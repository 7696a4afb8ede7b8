import { describe, expect, it } from 'vitest';
import type { ServiceTie, ServiceTransformer } from '../../../../shared/schemas/study-utility.ts';
import type { Inverter } from '../../../../shared/schemas/study.ts';
import { ask, brief, inverter, plant, rulesFor, study } from './screen-studies.ts';

const can: ServiceTransformer = {
  ...{ id: 'can', node: 'poi', kva: 25, secondaryV: 240, phases: 'A', shared: true, centreTapped: true },
};
const roof = (kva: number, tie: Partial<ServiceTie> = {}): Partial<Inverter> => {
  return { kva, phases: 'A', service: { transformer: 'can', ...tie } };
};

/** A one-phase roof on the service transformer. */
const served = (kva: number, differs: Partial<ServiceTransformer> = {}, tie: Partial<ServiceTie> = {}) =>
  plant(kva, roof(kva, tie), ({ feeder }) => (feeder.serviceTransformers = [{ ...can, ...differs }]));

describe.each(['shared-secondary', 'centre-tap-balance'] as const)('The question %s', (question) => {
  it('does not apply to three phases, nor behind the own transformer of a project', () => {
    expect(ask(plant(2000), question)[0]!.verdict).toBe('not-applicable');
    expect(ask(study(), question)[0]!.verdict).toBe('not-applicable');
    const behind = study(({ project }) => {
      delete project.machines;
      project.inverters = [inverter('string', 10, { node: 'lv', phases: 'A' })];
    });
    expect(ask(behind, question)[0]!.verdict).toBe('not-applicable');
  });

  it('needs data where the service transformer of a one-phase generator is not known', () => {
    expect(brief(ask(plant(5, { phases: 'A' }), question))).toEqual([['plant', 'needs-data']]);
  });
});

describe('Generation on a shared secondary', () => {
  const question = 'shared-secondary';

  it.each([
    [20, '<=', 'within'],
    [20, '<', 'outside'],
    [20.01, '<=', 'outside'],
  ] as const)('of %d kW against 20 kW, %s, is %s', (kva, comparison, verdict) => {
    const rules = rulesFor(question, { limits: [{ limit: 20, comparison, consequence: 'supplemental' }] });
    expect(ask(served(kva), question, rules)).toMatchObject([{ element: 'can', value: kva, verdict }]);
  });

  it('counts what is recorded for the transformer, and generators that are tied to it', () => {
    const file = plant(5, roof(5), ({ feeder }) => {
      feeder.serviceTransformers = [
        { ...can, generationKw: 8 },
        { ...can, id: 'next' },
      ];
      feeder.inverters = [
        inverter('ahead', 7, { phases: 'A', service: { transformer: 'can' } }),
        inverter('other', 90, { phases: 'A', service: { transformer: 'next' } }),
      ];
    });
    expect(ask(file, question)[0]).toMatchObject({ value: 20, before: 15, verdict: 'within' });
  });

  it('does not apply where it serves one customer, and needs data where that is not known', () => {
    expect(ask(served(30, { shared: false }), question)[0]!.verdict).toBe('not-applicable');
    const { shared: _, ...unknown } = can;
    const file = plant(5, roof(5), ({ feeder }) => (feeder.serviceTransformers = [unknown]));
    expect(ask(file, question)[0]!.verdict).toBe('needs-data');
  });

  it('is answered for each transformer that the project is on', () => {
    const file = plant(21, roof(21), ({ feeder, project }) => {
      feeder.serviceTransformers = [can, { ...can, id: 'next', shared: false }];
      project.inverters!.push(inverter('shed', 3, { phases: 'A', service: { transformer: 'next' } }));
    });
    expect(brief(ask(file, question))).toEqual([['can', 'outside']]);
  });
});

describe('The balance of a centre-tapped service', () => {
  const question = 'centre-tap-balance';

  it.each([
    [7, 2, '<=', 'within'],
    [2, 7, '<=', 'within'],
    [7, 2, '<', 'outside'],
    [7.01, 2, '<=', 'outside'],
  ] as const)(
    'with %d kW in one half and %d kW in the other of 25 kVA, %s 20 %%, is %s',
    (first, second, comparison, verdict) => {
      const rules = rulesFor(question, { limits: [{ limit: 20, comparison, consequence: 'supplemental' }] });
      const file = served(10, {}, { firstHalfKw: first, secondHalfKw: second });
      const [finding] = ask(file, question, rules);
      expect(finding).toMatchObject({ element: 'can', verdict });
      expect(finding!.value).toBeCloseTo((Math.abs(first - second) / 25) * 100, 9);
    },
  );

  it('adds up the generators of a project before it compares the halves', () => {
    const file = plant(5, roof(5, { firstHalfKw: 5, secondHalfKw: 0 }), ({ feeder, project }) => {
      feeder.serviceTransformers = [can];
      const tie = { transformer: 'can', firstHalfKw: 0, secondHalfKw: 4 };
      project.inverters!.push(inverter('shed', 4, { phases: 'A', service: tie }));
    });
    expect(ask(file, question)[0]!.value).toBeCloseTo(4, 9);
  });

  it('does not apply without a centre tap, and needs data where that or a half is not known', () => {
    expect(ask(served(10, { centreTapped: false }), question)[0]!.verdict).toBe('not-applicable');
    const { centreTapped: _, ...unknown } = can;
    const file = plant(5, roof(5), ({ feeder }) => (feeder.serviceTransformers = [unknown]));
    expect(ask(file, question)[0]!.verdict).toBe('needs-data');
    expect(ask(served(10, {}, { firstHalfKw: 5 }), question)[0]!.verdict).toBe('needs-data');
  });
});
