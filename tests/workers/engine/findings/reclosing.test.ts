import { describe, expect, it } from 'vitest';
import type { Device } from '../../../../shared/schemas/study.ts';
import { ask, closeTie, inverterStudy, machineStudy } from './island-studies.ts';

const question = ['reclosing', 'islanding'] as const;

/** Minimum loads of which the plant is half or less, so that no island can run on. */
const calm = (change: Parameters<typeof inverterStudy>[0] = () => undefined) =>
  inverterStudy((study) => {
    study.feeder.sections!.forEach((section) => (section.minimumKw = 4000));
    change(study);
  });

const set = (...extras: Partial<Device>[]) => {
  return ({ feeder }: ReturnType<typeof inverterStudy>) =>
    extras.forEach((extra, index) => Object.assign(feeder.devices![index]!, extra));
};

describe('Reclosing', () => {
  it('is safe where every device waits for a dead line or does not close again, machines or not', () => {
    const study = machineStudy(set({ voltageSupervised: true, deadTimeS: 0.5 }, { deadTimeS: 0 }));
    const [finding] = ask(study, question);
    expect(finding).toMatchObject({ verdict: 'within', element: 'CB-1', consequence: 'none' });
    expect(finding!.note).toContain('CB-1 waits for a dead line. RC-1 does not close again by itself.');
  });

  it('is safe without supervision where nothing holds voltage and no island runs on; the dead time is shown', () => {
    const unsupervised = { voltageSupervised: false, deadTimeS: 0.5 };
    const [finding] = ask(calm(set(unsupervised, { ...unsupervised, deadTimeS: 5 })), question);
    expect(finding).toMatchObject({ verdict: 'within', element: 'CB-1' });
    expect(finding!.working!.at(-1)!.result.value).toBe(-1.5);
    const [shown] = ask(calm(set({ voltageSupervised: false, deadTimeS: 2 }, { deadTimeS: 0 })), question);
    expect(shown!.working!.at(-1)!.result.value).toBe(0);
  });

  it('is not where a device closes on a machine without waiting', () => {
    const study = machineStudy(set({ voltageSupervised: false, deadTimeS: 0.5 }, { deadTimeS: 0 }));
    const findings = ask(study, question);
    expect(findings).toHaveLength(1);
    expect(findings[0]).toMatchObject({ verdict: 'outside', element: 'CB-1', consequence: 'study' });
    expect(findings[0]!.note).toContain('0.5 s, against the 2 s');
  });

  it('is not where a device closes on inverters that may run on', () => {
    const study = inverterStudy(set({ voltageSupervised: false }, { voltageSupervised: true }));
    expect(ask(study, question)[0]).toMatchObject({ verdict: 'outside', element: 'CB-1' });
  });

  it('needs data where supervision is not known and nothing else makes it safe', () => {
    expect(ask(machineStudy(set({}, { deadTimeS: 0 })), question)[0]).toMatchObject({
      verdict: 'needs-data',
      element: 'CB-1',
    });
    // On inverters that cannot run on, supervision need not be known.
    expect(ask(calm(), question)[0]!.verdict).toBe('within');
  });

  it('needs data where the question of islanding has no answer, or is not asked', () => {
    const study = calm(({ feeder }) => feeder.sections!.forEach((section) => delete section.minimumKw));
    expect(ask(study, question)[0]!.verdict).toBe('needs-data');
    expect(ask(calm(), ['reclosing'])[0]!.verdict).toBe('needs-data');
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
