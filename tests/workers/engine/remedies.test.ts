import { describe, expect, it } from 'vitest';
import { proFormaRuleSet } from '../../../shared/rules/pro-forma.ts';
import type { Remedy } from '../../../shared/schemas/remedies.ts';
import { studyFormat } from '../../../shared/schemas/study.ts';
import type { ProjectStudy } from '../../../workers/engine/findings/make-screening.ts';
import { proposeInverterBank } from '../../../workers/engine/remedies/grounding.ts';
import { listRemedies } from '../../../workers/engine/remedies/list-remedies.ts';
import { findPlant } from '../../../workers/engine/remedies/plant.ts';
import { findLast, makeSearch } from '../../../workers/engine/remedies/remedy-tests.ts';
import { findStandardRatings } from '../../../workers/engine/remedies/standard-ratings.ts';
import { runStudy } from '../../../workers/engine/run-study.ts';
import { applyChanges } from '../../../workers/engine/trials.ts';
import type { TrialChange } from '../../../shared/schemas/trials.ts';
import { makeFixtureModel } from '../../support/fixture-feeder.ts';
import { machineProject } from '../../support/fixture-runs.ts';

function makeStudy(): ProjectStudy {
  return { format: studyFormat, ...makeFixtureModel(), project: machineProject() };
}

/** Verdicts of one question in a whole study with these changes. */
function verdictsOf(study: ProjectStudy, changes: TrialChange[], id: string): string[] {
  const applied = applyChanges(study, changes);
  if ('problems' in applied) throw new Error('These changes do not hold together');
  const { findings } = runStudy(applied.study, proFormaRuleSet);
  return findings.filter((finding) => finding.id === id).map(({ verdict }) => verdict);
}

function remedyFor(study: ProjectStudy, question: string, words: RegExp): Remedy {
  const { remedies, without } = listRemedies(study, proFormaRuleSet);
  const found = remedies.find((remedy) => remedy.question === question && words.test(remedy.words));
  if (!found)
    throw new Error(`None for ${question}: ${JSON.stringify([remedies.map((r) => r.words), without])}`);
  return found;
}

const figureOf = ({ figures }: Pick<Remedy, 'figures'>, words: string) =>
  figures.find((figure) => figure.words === words)!.value;

describe('for an ungrounded machine', () => {
  const study = makeStudy();
  study.project.transformers![0]!.connection = 'Dyn1';

  it('a ground bank brings X0/X1 of the plant to 2.5, and every island case within', () => {
    const remedy = remedyFor(study, 'effective-grounding', /ground bank/);
    expect(verdictsOf(study, [], 'effective-grounding')).toEqual(['outside']);
    expect(verdictsOf(study, remedy.changes, 'effective-grounding')).toEqual(['within']);
    const applied = applyChanges(study, remedy.changes);
    const { z0, z1 } = findPlant((applied as { study: ProjectStudy }).study);
    expect(z0!.im / z1!.im).toBeCloseTo(2.5, 9);
    expect(remedy.fixes.map(({ id }) => id)).toContain('effective-grounding');
  });

  it('other windings with a reactor Xn = (2.5·X1 − XT0)/3 do the same', () => {
    const remedy = remedyFor(study, 'effective-grounding', /star on the utility side/);
    expect(verdictsOf(study, remedy.changes, 'effective-grounding')).toEqual(['within']);
    const applied = applyChanges(study, remedy.changes);
    const { z0, z1 } = findPlant((applied as { study: ProjectStudy }).study);
    expect(z0!.im / z1!.im).toBeCloseTo(2.5, 9);
    // By hand: 6 % of 12.47²/3 = 3.11 Ω at X/R 10, and 16 % of 12.47²/2.5 = 9.95 Ω: X1 = 3.0946 + 9.9521 Ω.
    expect(z1!.im).toBeCloseTo(13.0466, 3);
    expect(figureOf(remedy, 'Neutral reactor')).toBeCloseTo((2.5 * 13.0466 - 3.0946) / 3, 3);
  });

  it('the neutral’s ratings are told: ten seconds of ground fault, and 3 % of unbalance all the time', () => {
    const remedy = remedyFor(study, 'effective-grounding', /ground bank/);
    const x = figureOf(remedy, 'Bank, X0');
    const z0 = Math.hypot(x, x / 4);
    const continuous = (3 * 0.03 * 12470) / Math.sqrt(3) / z0;
    expect(figureOf(remedy, 'Neutral current all the time')).toBeCloseTo(continuous, 6);
    const tenSeconds = figureOf(remedy, 'Neutral current for ten seconds');
    expect(tenSeconds).toBeLessThan((3 * 1.05 * 12470) / Math.sqrt(3) / z0);
    expect(tenSeconds).toBeGreaterThan(continuous);
  });

  it('a remedy says what it leaves open', () => {
    const remedy = remedyFor(study, 'effective-grounding', /ground bank/);
    expect(remedy.leaves.map(({ id }) => id)).toContain('section-peak-load');
  });
});

describe('for inverters', () => {
  it('of 5 MVA at 12.47 kV a bank of 0.6 pu is 18.660 Ω and 4.665 Ω', () => {
    const study: ProjectStudy = {
      ...makeStudy(),
      project: {
        id: 'plant',
        node: 'n2',
        inverters: [{ id: 'unit', node: 'n2', phases: 'ABC', kva: 5000, faultCurrentPu: 1.2 }],
      },
    };
    const [finding] = runStudy(study, proFormaRuleSet).findings;
    const always = { ...makeSearch(study, proFormaRuleSet, finding!, []), holds: () => true };
    const proposal = proposeInverterBank(always) as Remedy;
    expect(figureOf(proposal, 'Bank, X0')).toBeCloseTo(18.66, 3);
    expect(figureOf(proposal, 'Bank, R0')).toBeCloseTo(4.665, 3);
  });
});

describe('for a duty that is outside', () => {
  const study = makeStudy();
  const device = study.feeder.devices!.find(({ interruptingKa }) => interruptingKa !== undefined)!;
  Object.assign(device, { kind: 'recloser', interruptingKa: 4, testXr: 8 });

  it('the smallest rating of the standard series passes, and the one below it does not', () => {
    const remedy = remedyFor(study, 'interrupting-duty', /Replace/);
    const [change] = remedy.changes as Extract<TrialChange, { kind: 'device' }>[];
    expect(change!.element).toBe(device.id);
    const stillOutside = (changes: TrialChange[]) =>
      verdictsOf(study, changes, 'interrupting-duty').filter((verdict) => verdict === 'outside').length;
    const { ratings } = findStandardRatings(device, 12.47)!;
    const below = ratings[ratings.findIndex(({ ka }) => ka === change!.interruptingKa) - 1]!;
    expect(stillOutside(remedy.changes)).toBeLessThan(stillOutside([]));
    expect(stillOutside([{ ...change!, interruptingKa: below.ka }])).toBe(stillOutside([]));
  });
});

describe('for a size that is too large', () => {
  it('the size that is told passes, and a hundredth more does not', () => {
    const study = makeStudy();
    const remedy = remedyFor(study, 'section-peak-load', /no larger than/);
    const [change] = remedy.changes as Extract<TrialChange, { kind: 'size' }>[];
    expect(verdictsOf(study, remedy.changes, 'section-peak-load')).toEqual(['within']);
    const more = { kind: 'size' as const, factor: change!.factor + 0.01 };
    expect(verdictsOf(study, [more], 'section-peak-load')).toEqual(['outside']);
  });

  it('what no size mends is listed with what was tried', () => {
    const { without } = listRemedies(makeStudy(), proFormaRuleSet);
    const contribution = without.find(({ question }) => question === 'contribution');
    expect(contribution?.words).toMatch(/reactor.*transformer.*hundredth/s);
  });
});

describe('for a rise of the voltage that is outside', () => {
  const study: ProjectStudy = {
    ...makeStudy(),
    project: {
      id: 'plant',
      node: 'n3',
      inverters: [{ id: 'unit', node: 'n3', phases: 'ABC', kva: 9000, faultCurrentPu: 1.2 }],
    },
  };
  for (const load of study.feeder.loads!) load.minimumKw = load.kw / 5;
  const riseVerdict = (changes: TrialChange[]) => {
    const applied = applyChanges(study, changes) as { study: ProjectStudy };
    const { findings } = runStudy(applied.study, proFormaRuleSet);
    return findings.find(({ element }) => element === 'n3 (rise)')!.verdict;
  };

  it('the power factor that is told is the nearest to 1 that is enough', () => {
    const remedy = remedyFor(study, 'steady-voltage', /power factor/);
    const [change] = remedy.changes as Extract<TrialChange, { kind: 'power-factor' }>[];
    expect([riseVerdict([]), riseVerdict(remedy.changes)]).toEqual(['outside', 'within']);
    const nearer = Math.round((change!.powerFactor + 0.01) * 100) / 100;
    expect(riseVerdict([{ ...change!, powerFactor: nearer }])).toBe('outside');
  });

  it('the export that is told is the most that is enough', () => {
    const remedy = remedyFor(study, 'steady-voltage', /Limit the export/);
    const [change] = remedy.changes as { kind: 'export-limit'; kw: number }[];
    expect(riseVerdict(remedy.changes)).toBe('within');
    expect(riseVerdict([{ ...change!, kw: change!.kw + 5 }])).toBe('outside');
  });
});

it('the last number that holds is found, at both ends and where none does', () => {
  for (const most of [1, 2, 57, 99]) expect(findLast(1, 99, (number) => number <= most)).toBe(most);
  expect(findLast(1, 99, () => false)).toBeUndefined();
});
