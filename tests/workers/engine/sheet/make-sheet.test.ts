import { describe, expect, it } from 'vitest';
import { proFormaRuleSet } from '../../../../shared/rules/pro-forma.ts';
import type { Sheet } from '../../../../shared/schemas/sheets.ts';
import type { Study } from '../../../../shared/schemas/study.ts';
import type { WorkingStep } from '../../../../shared/schemas/working.ts';
import { workStudy } from '../../../../workers/engine/run-study.ts';
import { makeSheet } from '../../../../workers/engine/sheet/make-sheet.ts';
import { findFault, listFaults } from '../../../support/recompute-step.ts';
import { readCase } from '../cases.ts';

function sheetOf(study: Study): Sheet {
  const { result, worked } = workStudy(study, proFormaRuleSet);
  if (!worked) throw new Error('Expected a study with a project.');
  return makeSheet(result, worked, {});
}

function listSteps(sheet: Sheet): readonly (readonly WorkingStep[])[] {
  const { basis, elements } = sheet;
  return [
    ...sheet.networks.map(({ steps }) => [...basis, ...elements, ...steps]),
    ...sheet.faults.map(({ steps }) => steps),
    ...sheet.findings.map(({ working }) => working),
    sheet.coordination?.working ?? [],
  ];
}

const cases = ['marrow-lane', 'fallow-bridge', 'random-11', 'random-12', 'random-13', 'random-14'];

describe('A working sheet', () => {
  it.each(cases)('gives every result of %s from the numbers that it prints', (name) => {
    const steps = listSteps(sheetOf(readCase(name)));
    expect(steps.flat().length).toBeGreaterThan(20);
    expect(steps.flatMap(listFaults)).toEqual([]);
  });

  it('gives the corrected impedances of method iec60909, and adds those up', () => {
    const sheet = sheetOf({ ...readCase('marrow-lane'), options: { method: 'iec60909' } });
    expect(listSteps(sheet).flatMap(listFaults)).toEqual([]);
    expect(sheet.networks.every(({ isAddedUp }) => isAddedUp)).toBe(true);
    expect(sheet.elements[0]!.words).toContain('IEC 60909-0');
  });

  it('is found out when one step of it is wrong', () => {
    const steps = listSteps(sheetOf(readCase('marrow-lane'))).flat();
    const computed = steps.filter(({ formula }) => formula !== undefined);
    for (const step of computed) {
      const { value } = step.result;
      const wrong = typeof value === 'number' ? value * 1.0001 : { re: value.re, im: value.im * 1.0001 };
      const spoilt = { ...step, result: { ...step.result, value: wrong } };
      expect(findFault(spoilt), `${step.result.symbol} = ${step.formula}`).toBeDefined();
    }
  });

  it('adds the networks of Marrow Lane up to what was worked out by hand', () => {
    const { networks } = sheetOf(readCase('marrow-lane'));
    const after = (sequence: string) =>
      networks.find((each) => each.state === 'after' && each.sequence === sequence)!;
    expect(after('positive').z).toMatchObject({ im: expect.closeTo(0.101418, 6) as number });
    expect(after('positive').isAddedUp).toBe(true);
    // The step-up's delta is on the feeder: the project changes nothing in the zero sequence.
    expect(after('zero').sameAs).toEqual({ state: 'none', sequence: 'zero' });
    expect(after('zero').z).toMatchObject({ im: expect.closeTo(0.14, 9) as number });
  });

  it('says of a network with loops that no hand follows it', () => {
    const looped = cases
      .map((name) => sheetOf(readCase(name)))
      .filter(({ networks }) => !networks[0]!.isAddedUp);
    expect(looped.length).toBeGreaterThan(0);
  });

  it('prints the fault currents of the result in its last steps', () => {
    const study = readCase('random-11');
    const { result, worked } = workStudy(study, proFormaRuleSet);
    const { faults } = makeSheet(result, worked!, {});
    for (const { kind, state, steps, amps } of faults) {
      expect(amps).toBe(result.nodes[study.project!.node]![state]![kind]);
      if (steps.length > 0) expect(steps.at(-1)!.result).toMatchObject({ value: amps, unit: 'A' });
    }
    expect(faults.filter(({ steps }) => steps.length > 0).length).toBeGreaterThan(6);
  });
});
