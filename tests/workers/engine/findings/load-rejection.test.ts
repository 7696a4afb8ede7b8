import { describe, expect, it } from 'vitest';
import { ask, closeTie, inverterStudy, limitAt, machineStudy } from './island-studies.ts';

const question = ['load-rejection'] as const;

const withMinimum = (kw: number, change: Parameters<typeof inverterStudy>[0] = () => undefined) =>
  inverterStudy((study) => {
    study.feeder.sections![1]!.minimumKw = kw;
    change(study);
  });

const tested = (percent: number): NonNullable<Parameters<typeof inverterStudy>[0]> => {
  return ({ project }) => (project.inverters![0]!.listing!.loadRejectionPercent = percent);
};

describe('Load rejection', () => {
  it('is all generation over the minimum load of the worst island', () => {
    const [finding] = ask(withMinimum(1600), question);
    expect(finding).toMatchObject({ verdict: 'within', element: 'RC-1', value: 125, before: 0, limit: 130 });
    expect(finding!.note).toContain('2000 kW of the project, against 1600 kW of load');
  });

  it.each([
    [1500, 130],
    [1400, 138],
  ])('against %d kW is outside the limit of %d %%', (kw, limit) => {
    const [finding] = ask(withMinimum(kw), question);
    expect(finding).toMatchObject({ verdict: 'outside', limit, consequence: 'study' });
    expect(finding!.value).toBeCloseTo((2000 / kw) * 100, 9);
  });

  it('passes exactly the limit where the rule is inclusive, and fails it where it is strict', () => {
    expect(ask(withMinimum(1600), question, limitAt(125))[0]!.verdict).toBe('within');
    expect(ask(withMinimum(1600), question, limitAt(125, '<'))[0]!.verdict).toBe('outside');
  });

  it('is no more than the tests of all generators say', () => {
    const [finding] = ask(withMinimum(1000, tested(118)), question);
    expect(finding).toMatchObject({ verdict: 'within', value: 118 });
    expect(finding!.note).toContain('at most 118 %');
    // A test tells what a unit can do, not that an island with more load gets there.
    expect(ask(withMinimum(2000, tested(118)), question)[0]!.value).toBe(100);
    const one = withMinimum(1000, (study) => {
      tested(118)(study);
      study.feeder.inverters = [{ id: 'old', node: 'poi', phases: 'ABC', kva: 100, faultCurrentPu: 1.2 }];
    });
    expect(ask(one, question)[0]!.value).toBe(210);
  });

  it('is answered by the tests where the load is not known', () => {
    const unknown = inverterStudy((study) => {
      tested(135)(study);
      study.feeder.sections!.forEach((section) => delete section.minimumKw);
    });
    expect(ask(unknown, question)[0]).toMatchObject({ verdict: 'outside', value: 135, limit: 130 });
  });

  it('takes the worse moment of a minimum that is net of other generation', () => {
    const study = withMinimum(1000, ({ feeder }) => {
      feeder.inverters = [{ id: 'old', node: 'poi', phases: 'ABC', kva: 4000, faultCurrentPu: 1.2 }];
      feeder.sections!.forEach((section) => Object.assign(section, { minimumIs: 'net', netOf: ['old'] }));
    });
    // 2000 of 1000 kW with it off is more than 6000 of 5000 kW with all of it on.
    expect(ask(study, question)[0]!.value).toBe(200);
  });

  it('adds up the minimum of single loads where no section tells, if each one has it', () => {
    const loads = (last: number | undefined) =>
      inverterStudy(({ feeder }) => {
        feeder.sections = [];
        feeder.loads = [900, last].map((minimumKw, index) => {
          const load = { id: `load-${index}`, node: 'poi', phases: 'ABC', kw: 3000, kvar: 0 };
          return minimumKw === undefined ? load : { ...load, minimumKw };
        });
      });
    expect(ask(loads(700), question)[0]).toMatchObject({ element: 'CB-1', value: 125 });
    expect(ask(loads(undefined), question)[0]!.verdict).toBe('needs-data');
  });

  it('needs data for each device beyond which the load is not known, whatever passes elsewhere', () => {
    const study = inverterStudy(({ feeder }) => delete feeder.sections![0]!.minimumKw);
    expect(ask(study, question).map(({ element, verdict }) => [element, verdict])).toEqual([
      ['RC-1', 'within'],
      ['CB-1', 'needs-data'],
    ]);
    const dead = inverterStudy(({ feeder }) => (feeder.sections![1]!.minimumKw = 0));
    expect(ask(dead, question).at(-1)).toMatchObject({ element: 'RC-1', verdict: 'needs-data' });
  });

  it('needs data of a scenario that leaves other load in the island, and says so of the device that opens then', () => {
    const study = inverterStudy(({ feeder }) => {
      feeder.nodes.push({ id: 'yard', kv: 12.47, phases: 'ABC' });
      feeder.switches = [{ id: 'yard-switch', from: 'poi', to: 'yard', closed: true }];
      feeder.scenarios = [{ id: 'yard-off', switches: { 'yard-switch': false } }];
    });
    expect(ask(study, question).map(({ element, verdict }) => [element, verdict])).toEqual([
      ['CB-1', 'needs-data'],
      ['RC-1', 'needs-data'],
    ]);
  });

  it('does not apply where nothing generates', () => {
    expect(
      ask(
        machineStudy(({ project }) => delete project.machines),
        question,
      )[0]!.verdict,
    ).toBe('not-applicable');
  });

  it('calls for a study where a closed tie leaves another way to a source', () => {
    expect(ask(inverterStudy(closeTie), question)[0]).toMatchObject({
      verdict: 'needs-data',
      consequence: 'study',
    });
  });
});
