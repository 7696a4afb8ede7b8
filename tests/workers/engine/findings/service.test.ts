import { describe, expect, it } from 'vitest';
import type { ServiceTie, ServiceTransformer } from '../../../../shared/schemas/study-utility.ts';
import { ask, limitAt } from './island-studies.ts';
import { moveToLateral, voltageStudy } from './voltage-studies.ts';

const question = ['service'] as const;

const fullTie: ServiceTie = { transformer: 'ST', drop: { r: 0.03, x: 0.02 }, panelInterruptingKa: 10 };

/** Ten kilowatts on one phase, behind 25 kVA of 240 V with 2 % and X/R 1.5. */
function house(
  kva = 10,
  transformer: Partial<ServiceTransformer> = {},
  tie: ServiceTie | undefined = fullTie,
  change: Parameters<typeof voltageStudy>[0] = () => undefined,
) {
  return voltageStudy((study) => {
    moveToLateral(study, 'B');
    study.feeder.serviceTransformers = [
      {
        id: 'ST',
        node: 'tap',
        kva: 25,
        secondaryV: 240,
        phases: 'B',
        impedancePercent: 2,
        xr: 1.5,
        generationKw: 6,
        ...transformer,
      },
    ];
    const [inverter] = study.project.inverters!;
    study.project.inverters = [{ ...inverter!, kva, ...(tie && { service: tie }) }];
    change(study);
  });
}

describe('Service', () => {
  it('loads the transformer with what is connected and the project', () => {
    const [loading] = ask(house(), question);
    expect(loading).toMatchObject({ element: 'ST', verdict: 'within', value: 64, before: 24, limit: 100 });
  });

  it('is outside above its kVA, and within exactly at it', () => {
    expect(ask(house(19.5), question)[0]).toMatchObject({ verdict: 'outside', consequence: 'study' });
    expect(ask(house(19), question)[0]).toMatchObject({ verdict: 'within', value: 100 });
    expect(ask(house(19), question, limitAt(100, '<'))[0]!.verdict).toBe('outside');
  });

  it('adds up what the model ties to it where the record says nothing', () => {
    const study = house(10, {}, fullTie, ({ feeder }) => {
      delete feeder.serviceTransformers![0]!.generationKw;
      feeder.inverters = [
        { id: 'next', node: 'tap', phases: 'B', kva: 5, faultCurrentPu: 1.2, service: { transformer: 'ST' } },
      ];
    });
    expect(ask(study, question)[0]).toMatchObject({ value: 60, before: 20 });
  });

  it('adds what the model ties to it to what its record says', () => {
    const study = house(10, {}, fullTie, ({ feeder }) => {
      feeder.inverters = [
        {
          id: 'next',
          node: 'tap',
          phases: 'B',
          kva: 15,
          faultCurrentPu: 1.2,
          service: { transformer: 'ST' },
        },
      ];
    });
    // 6 kW recorded, 15 kW ahead in the queue and 10 kW of the project on 25 kVA.
    expect(ask(study, question)[0]).toMatchObject({ value: 124, before: 84, verdict: 'outside' });
  });

  it('needs data of a unit that names no transformer beside one that does', () => {
    const study = house(10, {}, fullTie, ({ project }) => {
      const [first] = project.inverters!;
      const { service: _, ...second } = { ...first!, id: 'second', kva: 45 };
      project.inverters!.push(second);
    });
    expect(ask(study, question).at(-1)).toMatchObject({ element: 'second', verdict: 'needs-data' });
  });

  it('needs data where nobody knows what is on it, unless it serves one customer', () => {
    const unknown = (shared: boolean) =>
      house(10, { shared }, fullTie, ({ feeder }) => delete feeder.serviceTransformers![0]!.generationKw);
    expect(ask(unknown(true), question)[0]!.verdict).toBe('needs-data');
    expect(ask(unknown(false), question)[0]).toMatchObject({ value: 40, before: 0 });
  });

  it('rises in the transformer with all, and on the drop with the project', () => {
    const [, rise] = ask(house(), question);
    // 2 % of 25 kVA with X/R 1.5: R = 0.02556, X = 0.03834 ohms; 16 kW·R/240² = 0.71 %, 10 kW·0.03/240² = 0.52 %.
    expect(rise).toMatchObject({ element: 'ST (rise)', verdict: 'within', limit: 3 });
    expect(rise!.value).toBeCloseTo(0.71 + 0.52, 1);
    expect(ask(house(24), question)[1]!.value).toBeGreaterThan(2);
    const long = house(10, {}, { ...fullTie, drop: { r: 0.15, x: 0.02 } });
    expect(ask(long, question)[1]).toMatchObject({ verdict: 'outside' });
  });

  it('holds the fault current against the panel', () => {
    // 240 V over 0.04608 ohms: 5208 A; 1.2 · 10 kVA/240 V = 50 A of the project; of the 6 kW recorded 30 A.
    const panel = ask(house(), question)[2]!;
    expect(panel).toMatchObject({ element: 'ST (panel)', verdict: 'within' });
    expect(panel.value).toBeCloseTo((5208.33 + 30 + 50) / 100, 2);
    expect(panel.before).toBeCloseTo((5208.33 + 30) / 100, 2);
    expect(panel.note).toContain('6 kW recorded for it count with 1.2 times');
    // From line to the middle half as much again.
    const split = ask(house(10, { centreTapped: true }), question)[2]!;
    expect(split.value).toBeCloseTo((1.5 * 5208.33 + 30 + 50) / 100, 2);
    expect(ask(house(10, { kva: 75 }), question)[2]!.verdict).toBe('outside');
  });

  it('counts the generators of others on the same secondary at the panel', () => {
    const next = {
      ...{ id: 'next', node: 'tap', phases: 'B', kva: 12, faultCurrentPu: 2 },
      service: { transformer: 'ST' },
    };
    const study = house(10, {}, fullTie, ({ feeder }) => (feeder.inverters = [next]));
    // 2 · 12 kVA/240 V = 100 A more.
    expect(ask(study, question)[2]!.value).toBeCloseTo((5208.33 + 30 + 100 + 50) / 100, 2);
  });

  it.each([
    ['drop', 1, { transformer: 'ST', panelInterruptingKa: 10 }, {}],
    ['impedance', 1, fullTie, { impedancePercent: undefined }],
    ['panel', 2, { transformer: 'ST', drop: { r: 0.03, x: 0.02 } }, {}],
    ['impedance for the fault', 2, fullTie, { xr: undefined }],
  ] as const)('needs data without %s', (_, place, tie, lacking) => {
    const study = house(10, {}, tie, ({ feeder }) => {
      for (const key of Object.keys(lacking) as (keyof typeof lacking)[])
        delete feeder.serviceTransformers![0]![key];
    });
    expect(ask(study, question)[place]).toMatchObject({ verdict: 'needs-data', value: null });
  });

  it('needs data where the transformer has no record', () => {
    const study = house();
    study.feeder.serviceTransformers![0]!.id = 'another';
    const found = ask(study, question);
    expect(found).toHaveLength(1);
    expect(found[0]!.verdict).toBe('needs-data');
  });

  it('takes the only service transformer at the place of a small project that names none', () => {
    const study = house();
    delete study.project.inverters![0]!.service;
    expect(ask(study, question)[0]).toMatchObject({ element: 'ST', value: 64 });
    study.feeder.serviceTransformers!.push({ ...study.feeder.serviceTransformers![0]!, id: 'ST2' });
    expect(ask(study, question)[0]).toMatchObject({ element: 'project', verdict: 'needs-data' });
  });

  it("takes the panel's rating that the project tells where the tie tells none", () => {
    const { panelInterruptingKa: _, ...tie } = fullTie;
    const study = house(10, {}, tie, ({ project }) => (project.panelInterruptingKa = 5));
    expect(ask(study, question)[2]).toMatchObject({ element: 'ST (panel)', verdict: 'outside' });
  });

  it('never passes for want of the tie where a service transformer stands at the place', () => {
    const large = (tie: ServiceTie | undefined) => house(60, { kva: 50, generationKw: 0 }, tie);
    const tied = large(fullTie);
    expect(ask(tied, question)[0]).toMatchObject({ element: 'ST', verdict: 'outside', value: 120 });
    delete tied.project.inverters![0]!.service;
    expect(ask(tied, question)).toMatchObject([{ element: 'project', verdict: 'needs-data' }]);
  });

  it.each([
    [
      'its own rated voltage',
      ({ project }: ReturnType<typeof voltageStudy>) => (project.inverters![0]!.ratedKv = 0.48),
    ],
    [
      'the voltage of the place',
      ({ feeder, project }: ReturnType<typeof voltageStudy>) => {
        const low = { id: 'low', kv: 0.48, phases: 'ABC' };
        feeder.nodes.push(low);
        const step = { id: 'step', from: 'poi', to: 'low', kva: 3000, impedancePercent: 6, xr: 8 };
        feeder.transformers!.push({ ...step, connection: 'YNyn0' });
        Object.assign(project, { node: 'low' });
        project.inverters![0]!.node = 'low';
      },
    ],
  ])('needs data of a large unit without a transformer of its own at low voltage by %s', (_, change) => {
    expect(ask(voltageStudy(change), question)).toMatchObject([
      { element: 'project', verdict: 'needs-data' },
    ]);
  });

  it('asks of a unit in front of the transformer that the project has', () => {
    const study = voltageStudy(({ feeder, project }) => {
      feeder.serviceTransformers = [
        { id: 'ST', node: 'poi', kva: 25, secondaryV: 480, phases: 'ABC', generationKw: 6 },
      ];
      project.nodes = [{ id: 'site', kv: 0.48, phases: 'ABC' }];
      const size = { kva: 50, impedancePercent: 4, xr: 4 };
      project.transformers = [{ ...size, id: 'own', from: 'poi', to: 'site', connection: 'YNyn0' }];
      Object.assign(project.inverters![0]!, { kva: 10 });
      project.inverters!.push({ ...project.inverters![0]!, id: 'behind', node: 'site' });
    });
    // 6 kW recorded and 10 kW at the place; what stands behind the project's own transformer is not on it.
    expect(ask(study, question).map(({ element, value }) => [element, value])).toMatchObject([
      ['ST', 64],
      ['ST (rise)', null],
      ['ST (panel)', null],
    ]);
  });

  it('does not apply to a project with a connection of its own, or without a generator', () => {
    expect(ask(voltageStudy(), question)[0]!.verdict).toBe('not-applicable');
    const none = voltageStudy(({ project }) => delete project.inverters);
    expect(ask(none, question)[0]!.verdict).toBe('not-applicable');
  });
});
