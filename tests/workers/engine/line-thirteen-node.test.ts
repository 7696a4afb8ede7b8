import { describe, expect, it } from 'vitest';
import { proFormaRuleSet } from '../../../shared/rules/pro-forma.ts';
import type { Study } from '../../../shared/schemas/study.ts';
import { runStudy } from '../../../workers/engine/run-study.ts';
import { checkedStudy, readCase } from './cases.ts';
import { cables, conductors, configurations, constructionOf, perMile } from './line-library.ts';

/* The IEEE 13-node test feeder from its constructions; its README says what is from the sheet and what is made up. */

const study = readCase('thirteen-node');
const result = runStudy(study, proFormaRuleSet);
const configurationOf = (id: string) => configurations.find((configuration) => configuration.id === id)!;
const linesOf = (of: Study) => of.feeder.lines!;

/** Every number of one object beside its like in another. */
function expectAlike(got: object, expected: object) {
  expect(Object.keys(got)).toEqual(Object.keys(expected));
  for (const [key, value] of Object.entries(expected)) {
    const own = (got as Record<string, unknown>)[key];
    if (typeof value === 'object') expectAlike(own as object, value as object);
    else if (typeof value === 'number') expect(own).toBeCloseTo(value, 8);
    else expect(own).toBe(value);
  }
}

describe('The thirteen-node feeder', () => {
  it('is built from the conductors, cables and spacings of the library', () => {
    const { feeder } = study;
    for (const own of feeder.conductors!)
      expectAlike(
        own,
        conductors.find(({ id }) => id === own.id)!,
      );
    for (const own of feeder.cables!)
      expectAlike(
        own,
        cables.find(({ id }) => id === own.id)!,
      );
    for (const own of feeder.constructions!) expectAlike(own, constructionOf(configurationOf(own.id)));
    expect(feeder.constructions).toHaveLength(7);
  });

  it.each(linesOf(study))('has the matrix of the sheet on line $id', ({ id, construction, phases }) => {
    const { zOhmPerMile, toleranceOhmPerMile, phases: ofTable } = configurationOf(construction!);
    expect(phases).toBe(ofTable);
    result.lines![id]!.zPerKm.forEach((row, i) =>
      row.forEach((z, j) =>
        perMile(z).forEach((value, part) => {
          expect(Math.abs(value - zOhmPerMile[i]![j]![part]!)).toBeLessThanOrEqual(toleranceOhmPerMile);
        }),
      ),
    );
  });

  it('reports the lines of the file and no more', () => {
    expect(Object.keys(result.lines!)).toEqual(linesOf(study).map(({ id }) => id));
  });

  // Worked in the README from the sheet's ohms per mile.
  it.each([
    ['650', 'threePhase', 8110.4],
    ['650', 'lineGround', 8269.5],
    ['680', 'threePhase', 2714.1],
    ['680', 'lineGround', 1823.7],
    ['652', 'lineGround', 1774.9],
    ['634', 'threePhase', 14_927],
  ] as const)('has the fault current worked by hand at %s, %s', (node, fault, amps) => {
    expect(result.nodes[node]!.none[fault]! / amps).toBeCloseTo(1, 3);
  });

  it('leaves null what a lateral lacks the phases for', () => {
    expect(result.nodes['652']!.none).toMatchObject({ threePhase: null, lineLine: null });
    expect(result.nodes['646']!.none.threePhase).toBeNull();
    expect(result.nodes['646']!.none.lineLine).toBeGreaterThan(0);
  });

  it('says once for each construction how far from transposed its lines are', () => {
    const ofConstructions = result.warnings.filter((warning) => warning.includes('transposed'));
    expect(ofConstructions[0]).toBe(
      'Line 650-632 (and 2 more) of construction 601, phases ABC, is taken as transposed but is not: ' +
        'its impedances per phase lie up to 10.4 % of z1 off their means.',
    );
    expect(ofConstructions).toHaveLength(3);
  });

  it('gives the currents that the same impedances written out give', () => {
    const written = structuredClone(study);
    for (const line of linesOf(written)) {
      const { z1, z0 } = result.lines![line.id]!;
      Object.assign(line, { z1, z0 });
      delete line.construction;
    }
    const again = runStudy(checkedStudy(written), proFormaRuleSet);
    expect(again.nodes).toEqual(result.nodes);
    expect(again).not.toHaveProperty('lines');
  });
});
