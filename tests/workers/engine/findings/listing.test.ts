import { describe, expect, it } from 'vitest';
import type { Listing } from '../../../../shared/schemas/study-utility.ts';
import { ask, inverterStudy, limitAt, machineStudy } from './island-studies.ts';

const question = ['listing'] as const;

const listedAs = (change: (listing: Listing) => void) =>
  inverterStudy(({ project }) => change(project.inverters![0]!.listing!));

describe('Listing and harmonics', () => {
  it('passes listed equipment with its distortion under the limit', () => {
    const [finding] = ask(inverterStudy(), question);
    expect(finding).toMatchObject({ verdict: 'within', element: 'plant', value: 3, limit: 5, unit: '%' });
    expect(finding!.note).toContain('UL 1741 SB, category III, area default');
  });

  it('passes exactly 5 % where the rule is inclusive, and fails it where it is strict', () => {
    const study = listedAs((listing) => (listing.trdPercent = 5));
    expect(ask(study, question)[0]!.verdict).toBe('within');
    expect(ask(study, question, limitAt(5, '<'))[0]!.verdict).toBe('outside');
    expect(
      ask(
        listedAs((listing) => (listing.trdPercent = 5.01)),
        question,
      )[0],
    ).toMatchObject({
      verdict: 'outside',
      consequence: 'study',
    });
  });

  it('fails equipment that is not listed, or to a standard that the rules do not name', () => {
    const unlisted = inverterStudy(({ project }) => {
      project.inverters![0]!.listed = false;
      delete project.inverters![0]!.listing!.standard;
    });
    const [refused] = ask(unlisted, question);
    // No number stands beside it: one that keeps its limit would read as if it decided.
    expect(refused).toMatchObject({ verdict: 'outside', value: null });
    expect(refused!.note).toContain('distortion is 3 %');
    const other = listedAs((listing) => (listing.standard = 'UL 17410'));
    expect(ask(other, question)[0]!.note).toContain('none of: UL 1741');
    const renamed = listedAs((listing) => (listing.standard = 'IEEE 1547.1-2020'));
    expect(ask(renamed, question)[0]!.verdict).toBe('within');
  });

  it.each(['standard', 'category', 'profile', 'trdPercent'] as const)(
    'needs data where %s is not known',
    (field) => {
      const [finding] = ask(
        listedAs((listing) => delete listing[field]),
        question,
      );
      expect(finding).toMatchObject({ verdict: 'needs-data', element: 'plant' });
    },
  );

  it('fails equipment that is said not to be listed, whatever standard its sheet names', () => {
    const study = inverterStudy(({ project }) => (project.inverters![0]!.listed = false));
    const [finding] = ask(study, question);
    expect(finding).toMatchObject({ verdict: 'outside', consequence: 'study' });
    expect(finding!.note).toContain('It is not listed.');
  });

  it('needs data of a machine that says nothing, and names each generator that is not within', () => {
    const study = inverterStudy(({ project }) => {
      project.machines = [{ id: 'genset', node: 'lv', kind: 'induction', kva: 100, xSubtransientPu: 0.17 }];
    });
    expect(ask(study, question).map(({ element, verdict }) => [element, verdict])).toEqual([
      ['genset', 'needs-data'],
    ]);
  });

  it('asks nothing of generators of others', () => {
    const study = inverterStudy(({ feeder }) => {
      feeder.inverters = [{ id: 'old', node: 'poi', phases: 'ABC', kva: 100, faultCurrentPu: 1.2 }];
    });
    expect(ask(study, question)).toHaveLength(1);
  });

  it('does not apply to a project without a generator', () => {
    expect(
      ask(
        machineStudy(({ project }) => delete project.machines),
        question,
      )[0]!.verdict,
    ).toBe('not-applicable');
  });
});
