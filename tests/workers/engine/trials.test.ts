import { describe, expect, it } from 'vitest';
import { proFormaRuleSet } from '../../../shared/rules/pro-forma.ts';
import { pairFindings } from '../../../shared/rules/pair-findings.ts';
import type { Finding } from '../../../shared/schemas/findings.ts';
import { studyFormat } from '../../../shared/schemas/study.ts';
import type { TrialChange } from '../../../shared/schemas/trials.ts';
import type { ProjectStudy } from '../../../workers/engine/findings/make-screening.ts';
import { listProblems } from '../../../workers/engine/problems.ts';
import { runStudy } from '../../../workers/engine/run-study.ts';
import { applyChanges, screenStudy, tryChanges } from '../../../workers/engine/trials.ts';
import { makeFixtureModel } from '../../support/fixture-feeder.ts';
import { machineProject } from '../../support/fixture-runs.ts';

const study: ProjectStudy = { format: studyFormat, ...makeFixtureModel(), project: machineProject() };
const inverterStudy: ProjectStudy = {
  ...study,
  project: {
    id: 'plant',
    node: 'n2',
    inverters: [
      { id: 'east', node: 'n2', phases: 'ABC', kva: 300, faultCurrentPu: 1.2 },
      { id: 'west', node: 'n2', phases: 'ABC', kva: 100, faultCurrentPu: 1.2, exportKw: 80 },
    ],
  },
};

function apply(changes: TrialChange[], to = study): ProjectStudy {
  const applied = applyChanges(to, changes);
  if ('problems' in applied) throw new Error(listProblems(applied.problems).join('\n'));
  return applied.study;
}

function problemsOf(changes: TrialChange[], to = study): string[] {
  const applied = applyChanges(to, changes);
  return 'problems' in applied ? listProblems(applied.problems) : [];
}

it('gives the very findings that a whole study gives, with and without changes', () => {
  const screened = screenStudy(study, proFormaRuleSet);
  expect('findings' in screened && screened.findings).toEqual(runStudy(study, proFormaRuleSet).findings);
  const changes: TrialChange[] = [{ kind: 'transformer', element: 'step-up', impedancePercent: 9 }];
  const tried = tryChanges(study, changes, proFormaRuleSet);
  expect('findings' in tried && tried.findings).toEqual(runStudy(apply(changes), proFormaRuleSet).findings);
});

describe('a change', () => {
  it('of size scales every generator with its export limit, and leaves what was handed in as it was', () => {
    const before = structuredClone(inverterStudy);
    const { inverters } = apply([{ kind: 'size', factor: 0.5 }], inverterStudy).project;
    expect(inverters).toMatchObject([{ kva: 150 }, { kva: 50, exportKw: 40 }]);
    expect(inverterStudy).toEqual(before);
  });

  it('of the export limit is shared by size, and lifted from all of them by null', () => {
    const limited = apply([{ kind: 'export-limit', kw: 200 }], inverterStudy).project.inverters!;
    expect(limited.map(({ exportKw }) => exportKw)).toEqual([150, 50]);
    const lifted = apply([{ kind: 'export-limit', kw: null }], inverterStudy).project.inverters!;
    expect(lifted.map((inverter) => 'exportKw' in inverter)).toEqual([false, false]);
  });

  it('of power factor and fault current reaches every inverter', () => {
    const { inverters } = apply(
      [
        { kind: 'power-factor', absorbs: true, powerFactor: 0.95 },
        { kind: 'fault-current', perUnit: 1.1 },
      ],
      inverterStudy,
    ).project;
    for (const inverter of inverters!) {
      expect(inverter).toMatchObject({ powerFactor: -0.95, faultCurrentPu: 1.1 });
    }
  });

  it('of the windings drops the neutral that the new ones do not bring out', () => {
    const grounded = apply([
      { kind: 'transformer', element: 'step-up', neutralFrom: { kind: 'impedance', rOhm: 0, xOhm: 2 } },
    ]);
    expect(grounded.project.transformers![0]!.neutralFrom).toEqual({ r: 0, x: 2 });
    const delta = apply([{ kind: 'transformer', element: 'step-up', connection: 'Dyn1' }], grounded);
    expect(delta.project.transformers![0]).not.toHaveProperty('neutralFrom');
  });

  it('adds, changes and removes a ground bank', () => {
    const added = apply([{ kind: 'add-bank', node: 'n2', rOhm: 4, xOhm: 18 }]);
    expect(added.project.groundingBanks).toEqual([{ id: 'trial-bank-1', node: 'n2', z0: { r: 4, x: 18 } }]);
    const changed = apply([{ kind: 'change-bank', element: 'trial-bank-1', rOhm: 1, xOhm: 9 }], added);
    expect(changed.project.groundingBanks![0]!.z0).toEqual({ r: 1, x: 9 });
    expect(apply([{ kind: 'remove-bank', element: 'trial-bank-1' }], added).project.groundingBanks).toEqual(
      [],
    );
  });

  it('of a device of the feeder changes that one alone', () => {
    const { id } = study.feeder.devices![0]!;
    const { devices } = apply([{ kind: 'device', element: id, interruptingKa: 40 }]).feeder;
    expect(devices![0]).toEqual({ ...study.feeder.devices![0], interruptingKa: 40 });
    expect(devices!.slice(1)).toEqual(study.feeder.devices!.slice(1));
  });

  it('that names what is not there says where, what it got and what was expected, each of them', () => {
    const problems = problemsOf([
      { kind: 'size', factor: 1 },
      { kind: 'transformer', element: 'nothing', kva: 100 },
      { kind: 'add-bank', node: 'n4', rOhm: 1, xOhm: 1 },
      { kind: 'fault-current', perUnit: 1 },
    ]);
    expect(problems).toEqual([
      '/changes/1/element: got "nothing", expected the id of one of the project\'s transformers',
      '/changes/2/node: got "n4", expected one of n2, site',
      '/changes/3/kind: got "fault-current", expected a project with inverters',
    ]);
  });

  it('of a neutral that is not brought out, or whose machine is not known well enough, is refused', () => {
    expect(problemsOf([{ kind: 'machine-neutral', element: 'machine', neutral: { kind: 'solid' } }])).toEqual(
      ['/changes/0/element: got "machine", expected a machine whose zero-sequence reactance is known'],
    );
    expect(
      problemsOf([
        { kind: 'transformer', element: 'step-up', connection: 'Dyn1', neutralFrom: { kind: 'solid' } },
      ]),
    ).toEqual(['/changes/0/neutralFrom: got "Dyn1", expected windings that bring this neutral out']);
  });
});

it('pairs what both answer, and shows alone what only one of them does', () => {
  const finding = (id: string, element: string) => ({ id, element }) as Finding;
  const [one, two, three] = [finding('a', 'x'), finding('a', 'y'), finding('b', 'z')];
  expect(pairFindings([one, three], [one, two])).toEqual([
    { run: one, trial: one },
    { run: null, trial: two },
    { run: three, trial: null },
  ]);
  expect(pairFindings([one], [two])).toEqual([{ run: one, trial: two }]);
});
