import { describe, expect, it } from 'vitest';
import type { ProjectStudy } from '../../../../workers/engine/findings/make-screening.ts';
import { ask, closeTie, limitAt } from './island-studies.ts';
import { moveToLateral, voltageStudy } from './voltage-studies.ts';

const question = ['reverse-flow'] as const;

const sized = (kva: number, change: Parameters<typeof voltageStudy>[0] = () => undefined) =>
  voltageStudy((study) => {
    study.project.inverters![0]!.kva = kva;
    change(study);
  });

describe('Reverse flow', () => {
  it('is export less minimum load over the rating of the worst on the way', () => {
    // Beyond l2 there is no load: 2000 kW at 12.47 kV are 92.6 A, of 200.
    const [finding] = ask(voltageStudy(), question);
    expect(finding).toMatchObject({ element: 'l2', verdict: 'within', limit: 100 });
    expect(finding!.value).toBeCloseTo((2000 / (Math.sqrt(3) * 12.47) / 200) * 100, 9);
    expect(finding!.note).toContain('2000 kW of generation');
  });

  it('is outside where a line carries more than it may, and within exactly at the limit', () => {
    const study = sized(5000);
    const [finding] = ask(study, question);
    expect(finding).toMatchObject({ element: 'l2', verdict: 'outside', consequence: 'study' });
    expect(ask(study, question, limitAt(finding!.value!))[0]!.verdict).toBe('within');
    expect(ask(study, question, limitAt(finding!.value!, '<'))[0]!.verdict).toBe('outside');
  });

  it('takes the minimum load off beyond it, and counts what is connected', () => {
    const study = voltageStudy(({ feeder }) => {
      feeder.lines![1]!.ampacityA = 1e6;
      feeder.inverters = [{ id: 'other', node: 'mid', phases: 'ABC', kva: 500, faultCurrentPu: 1.2 }];
    });
    const [finding] = ask(study, question);
    // At l1: 2500 kW less 300 kW, with 90 kvar of load.
    expect(finding!.element).toBe('l1');
    expect(finding!.value).toBeCloseTo((Math.hypot(2200, 90) / (Math.sqrt(3) * 12.47) / 200) * 100, 9);
  });

  it('holds a transformer to its kVA', () => {
    const study = sized(2000, ({ feeder }) => (feeder.transformers![0]!.kva = 1000));
    expect(ask(study, question)[0]).toMatchObject({ element: 'bank', verdict: 'outside' });
  });

  it('counts what may be exported', () => {
    const study = voltageStudy(({ project }) => (project.inverters![0]!.exportKw = 500));
    expect(ask(study, question)[0]!.value).toBeCloseTo((500 / (Math.sqrt(3) * 12.47) / 200) * 100, 9);
  });

  it('looks at each phase', () => {
    const [finding] = ask(
      voltageStudy((study) => moveToLateral(study, 'B')),
      question,
    );
    expect(finding!.value).toBeCloseTo((200 / (12.47 / Math.sqrt(3)) / 200) * 100, 9);
  });

  it('is nothing where the load takes it all', () => {
    const study = sized(200, ({ feeder }) => (feeder.loads![0]!.node = 'poi'));
    expect(ask(study, question)[0]).toMatchObject({ verdict: 'within', value: 0 });
  });

  it.each([
    ['locked', 'outside'],
    [undefined, 'needs-data'],
    ['bidirectional', undefined],
    ['cogeneration', undefined],
  ] as const)('through a regulator that is %s when power flows back is %s', (reverse, verdict) => {
    const study = voltageStudy(({ feeder }) => {
      feeder.regulators = [
        {
          id: 'VR',
          branch: 'l1',
          end: 'from',
          phases: 'ABC',
          setVoltagePu: 1,
          bandwidthPu: 0.02,
          ...(reverse && { reverse }),
        },
      ];
    });
    const found = ask(study, question).find(({ element }) => element === 'VR');
    expect(found?.verdict).toBe(verdict);
  });

  it('holds a regulator to its amperes', () => {
    const study = voltageStudy(({ feeder }) => {
      feeder.regulators = [
        {
          id: 'VR',
          branch: 'l2',
          end: 'from',
          phases: 'ABC',
          setVoltagePu: 1,
          bandwidthPu: 0.02,
          reverse: 'cogeneration',
          ratedA: 50,
        },
      ];
    });
    expect(ask(study, question)[0]).toMatchObject({ element: 'VR', verdict: 'outside' });
  });

  it.each([
    [false, 'outside'],
    [undefined, 'needs-data'],
    [true, undefined],
  ] as const)('through a substation where it is allowed (%s) is %s', (reverseFlow, verdict) => {
    const study = voltageStudy(({ feeder }) => {
      feeder.substations = [
        { id: 'east', transformer: 'bank', ...(reverseFlow !== undefined && { reverseFlow }) },
      ];
    });
    expect(ask(study, question).find(({ element }) => element === 'east')?.verdict).toBe(verdict);
  });

  it('holds a bank that stands behind the source to its kVA', () => {
    const study = voltageStudy(({ feeder }) => {
      feeder.substations = [{ id: 'east', kva: 800, reverseFlow: true }];
    });
    expect(ask(study, question)[0]).toMatchObject({ element: 'east', verdict: 'outside' });
  });

  it('needs data for what it flows through without a known rating, which it names', () => {
    const study = voltageStudy(({ feeder }) => delete feeder.lines![1]!.ampacityA);
    const found = ask(study, question).find(({ element }) => element === 'l2');
    expect(found).toMatchObject({ verdict: 'needs-data', value: null });
  });

  it('counts loads without a minimum as nothing: enough to pass, never to fail', () => {
    const unknown = (kva: number) => sized(kva, ({ feeder }) => delete feeder.loads![0]!.minimumKw);
    expect(ask(unknown(2000), question)[0]).toMatchObject({ verdict: 'within' });
    const far = sized(4400, ({ feeder }) => {
      feeder.lines![1]!.ampacityA = 1e6;
      delete feeder.loads![0]!.minimumKw;
    });
    expect(ask(far, question)[0]).toMatchObject({ element: 'l1', verdict: 'needs-data' });
  });

  it.each([
    ['a second source', closeTie, 'Several sources meet'],
    [
      'a second line',
      ({ feeder }: ProjectStudy) => feeder.lines!.push({ ...feeder.lines![1]!, id: 'l2b' }),
      'another way to a source besides l2',
    ],
  ])('takes a study where %s gives the export another way', (_, change, note) => {
    const [finding] = ask(voltageStudy(change), question);
    expect(finding).toMatchObject({ verdict: 'needs-data', consequence: 'study' });
    expect(finding!.note).toContain(note);
  });

  it('does not apply to a project without a generator', () => {
    const study = voltageStudy(({ project }) => delete project.inverters);
    expect(ask(study, question)[0]!.verdict).toBe('not-applicable');
  });
});
