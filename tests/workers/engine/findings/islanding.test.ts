import { describe, expect, it } from 'vitest';
import { ask, closeTie, inverterStudy, limitAt, machineStudy } from './island-studies.ts';

const question = ['islanding'] as const;

const withMinimum = (kw: number, change: Parameters<typeof inverterStudy>[0] = () => undefined) =>
  inverterStudy((study) => {
    study.feeder.sections![0]!.minimumKw = 40_000;
    study.feeder.sections![1]!.minimumKw = kw;
    change(study);
  });

describe('Islanding', () => {
  it('is within where generation is well under the minimum load of every island', () => {
    const [finding] = ask(withMinimum(4000), question);
    expect(finding).toMatchObject({ verdict: 'within', element: 'RC-1', value: 0.5, before: 0 });
  });

  it('passes exactly two thirds, and fails the least more', () => {
    expect(ask(withMinimum(3000), question)[0]).toMatchObject({ verdict: 'within', value: 2 / 3 });
    expect(ask(withMinimum(2999), question)[0]).toMatchObject({ verdict: 'outside', consequence: 'study' });
    expect(ask(withMinimum(3000), question, limitAt(2 / 3, '<'))[0]!.verdict).toBe('outside');
  });

  it('takes the worse moment of a minimum that is net of other generation', () => {
    const study = withMinimum(4000, ({ feeder }) => {
      feeder.inverters = [{ id: 'old', node: 'poi', phases: 'ABC', kva: 8000, faultCurrentPu: 1.2 }];
      feeder.sections!.forEach((section) => Object.assign(section, { minimumIs: 'net', netOf: ['old'] }));
    });
    // 2000 of 4000 kW with it off, but 10 of 12 MW with all of it on.
    expect(ask(study, question)[0]).toMatchObject({ verdict: 'outside', value: 10 / 12 });
  });

  it('calls for a study of any machine, and of what forms a grid, at any size', () => {
    const machine = withMinimum(4000, ({ feeder }) => {
      feeder.machines = [{ id: 'mill', node: 'poi', kind: 'induction', kva: 10, xSubtransientPu: 0.17 }];
    });
    const [finding] = ask(machine, question);
    expect(finding).toMatchObject({ verdict: 'outside', consequence: 'study' });
    expect(finding!.note).toContain('mill can hold voltage');
    const forming = withMinimum(4000, ({ project }) => (project.inverters![0]!.gridForming = 'unknown'));
    expect(ask(forming, question)[0]!.verdict).toBe('outside');
    // Where the load is not known there is no ratio to show, and the machine takes a study all the same.
    expect(ask(machineStudy(), question)[0]).toMatchObject({ verdict: 'outside', value: null });
  });

  it('needs to know that the inverters of the project are tested to stop feeding an island', () => {
    const listing = (antiIslanding: boolean | undefined) =>
      withMinimum(4000, ({ project }) => {
        const known = project.inverters![0]!.listing!;
        if (antiIslanding === undefined) delete known.antiIslanding;
        else known.antiIslanding = antiIslanding;
      });
    expect(ask(listing(undefined), question)[0]!.verdict).toBe('needs-data');
    expect(ask(listing(false), question)[0]!.verdict).toBe('outside');
  });

  it('needs data where the minimum load of an island is not known', () => {
    const study = withMinimum(4000, ({ feeder }) => delete feeder.sections![0]!.minimumKw);
    expect(ask(study, question).at(-1)).toMatchObject({ element: 'CB-1', verdict: 'needs-data' });
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
    expect(ask(inverterStudy(closeTie), question)[0]).toMatchObject({ consequence: 'study' });
  });
});
