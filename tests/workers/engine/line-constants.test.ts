import { describe, expect, it } from 'vitest';
import type { Cable, Conductor, Construction, Place, Study } from '../../../shared/schemas/study.ts';
import { bundleStrands, rollTape } from '../../../workers/engine/cable-neutrals.ts';
import type { ComputedLine } from '../../../workers/engine/line-impedances.ts';
import { lineCalculator } from '../../../workers/engine/line-impedances.ts';
import {
  conductorSizes,
  kmPerMile,
  metresPerFoot,
  outsideDiameterM,
  positionOf,
  tapeSizes,
} from '../../../workers/engine/line-units.ts';
import {
  cables,
  conductors,
  configurations,
  constructionOf,
  listedCables,
  listedConductors,
  perMile,
  transposed,
} from './line-library.ts';

type Given = {
  construction: Construction;
  phases: string;
  frequencyHz?: number;
  conductors?: Conductor[];
  cables?: Cable[];
};

/** Computes one line of a construction from the library. */
function compute({ construction, phases, frequencyHz = 60, ...own }: Given): ComputedLine {
  const lists = { conductors, cables, ...own, constructions: [construction] };
  const study = { frequencyHz, feeder: { nodes: [], ...lists } } as unknown as Study;
  return lineCalculator(study)({ id: 'l', from: 'a', to: 'b', phases, km: 1, construction: construction.id });
}

function expectWithin(got: readonly number[], expected: readonly number[], tolerance: number) {
  got.forEach((value, index) => {
    expect(Math.abs(value - expected[index]!), `${got} against ${expected}`).toBeLessThanOrEqual(tolerance);
  });
}

const configurationOf = (id: string) => configurations.find((configuration) => configuration.id === id)!;

/* IEEE PES distribution test feeders; where each matrix is from is said in fixtures/conductors/configurations.json. */
describe('The line matrices of the IEEE test feeders', () => {
  it.each(configurations)('are reproduced from conductors and spacing: $id', (configuration) => {
    const { phases, zOhmPerMile, toleranceOhmPerMile } = configuration;
    const { zPerKm } = compute({ construction: constructionOf(configuration), phases });
    expect(zPerKm).toHaveLength(phases.length);
    zPerKm.forEach((row, i) =>
      row.forEach((z, j) => expectWithin(perMile(z), zOhmPerMile[i]![j]!, toleranceOhmPerMile)),
    );
  });

  it.each(configurations)('come out the same where the file is in metric units: $id', (configuration) => {
    const construction = constructionOf(configuration);
    const places = construction.places.map(({ phase, conductor, cable, ...at }): Place => {
      const held = conductor === undefined ? { cable: cable! } : { conductor };
      return { phase, ...held, ...positionOf({ phase, ...at }) };
    });
    const metric = {
      construction: { ...construction, places },
      conductors: conductors.map((conductor) => ({ id: conductor.id, ...conductorSizes(conductor) })),
      cables: cables.map((cable): Cable => {
        const { id, kind } = cable;
        const core = conductorSizes(cable.core);
        if (kind === 'tape') return { id, kind, core, ...tapeSizes(cable) };
        const strand = conductorSizes(cable.strand);
        return { id, kind, core, strands: cable.strands, strand, outsideDiameterM: outsideDiameterM(cable) };
      }),
    };
    const { phases } = configuration;
    expect(compute({ ...metric, phases })).toEqual(compute({ construction, phases }));
  });

  it.each(Object.entries(transposed.values))(
    'give these sequence values as if transposed: %s',
    (id, expected) => {
      const { z1, z0 } = compute({ construction: constructionOf(configurationOf(id)), phases: 'ABC' });
      expectWithin(perMile(z1), expected.z1, 1e-4);
      expectWithin(perMile(z0), expected.z0, 1e-4);
    },
  );

  it('vouch for each conductor and cable that the library calls confirmed', () => {
    for (const { id, confirmed, confirmedBy = [] } of [...listedConductors, ...listedCables]) {
      expect(confirmed, id).toBe(confirmedBy.length > 0);
      for (const name of confirmedBy) {
        const { conductor, neutral, cable } = configurationOf(name);
        const wires = listedCables.filter((listed) => listed.id === cable).flatMap(Object.values);
        expect([conductor, neutral, cable, ...wires], `${id} in ${name}`).toContain(id);
      }
    }
  });

  // The table's matrix has 0.6063 ohms per mile for the neutral of 607, the handbook 0.607.
  it('has the resistance of 607 to the last digit with the neutral that the table must have used', () => {
    const neutral = conductors.find(({ id }) => id === 'cu-1/0')!;
    const own = { ...neutral, id: 'own', ohmPerMile: 0.6063 };
    const construction = constructionOf({ ...configurationOf('607'), neutral: 'own' });
    const { zPerKm } = compute({ construction, phases: 'A', conductors: [own] });
    expect(perMile(zPerKm[0]![0]!)[0]).toBeCloseTo(1.3425, 4);
  });
});

/* W. H. Kersting, Distribution System Modeling and Analysis, examples 4.1 and 4.2: from memory, reproduced. */
it('finds the sequence impedances of 336.4 26/7 with a 4/0 neutral, Kersting examples 4.1 and 4.2', () => {
  const { z1, z0 } = compute({ construction: constructionOf(configurationOf('1')), phases: 'ABC' });
  expectWithin(perMile(z0), [0.7735, 1.9373], 1e-4);
  expectWithin(perMile(z1), [0.3061, 0.627], 1e-4);
});

describe('The conductor library', () => {
  // A handbook's ACSR table in metric units, read: mΩ/km at 50 °C, GMR and diameter in mm, ampacity.
  it.each([
    {
      name: 'Dove',
      id: 'acsr-556.5',
      milliohmPerKm: 115.6,
      gmrMm: 9.54,
      diameterMm: 23.55,
      ampacityA: 730,
      off: 1e-3,
    },
    // Here the older table's resistance is 0.7 % lower.
    {
      name: 'Grosbeak',
      id: 'acsr-636',
      milliohmPerKm: 101.2,
      gmrMm: 10.21,
      diameterMm: 25.15,
      ampacityA: 780,
      off: 7.5e-3,
    },
  ])('agrees with a metric handbook on $name', ({ id, milliohmPerKm, gmrMm, diameterMm, ampacityA, off }) => {
    const { ohmPerKm, gmrM, diameterM } = conductorSizes(
      conductors.find((conductor) => conductor.id === id)!,
    );
    expect(Math.abs(ohmPerKm * 1000 - milliohmPerKm) / milliohmPerKm).toBeLessThanOrEqual(off);
    expect(gmrM * 1000).toBeCloseTo(gmrMm, 2);
    expect(diameterM * 1000).toBeCloseTo(diameterMm, 1);
    expect(listedConductors.find((conductor) => conductor.id === id)!.ampacityA).toBe(ampacityA);
  });

  it('has a geometric mean radius below the radius for every conductor', () => {
    for (const conductor of conductors) {
      const { gmrM, diameterM } = conductorSizes(conductor);
      expect(gmrM, conductor.id).toBeLessThan(diameterM / 2);
    }
  });
});

/* Kersting, 4.2: from memory, confirmed by the matrices above. */
describe('What lies around a cable', () => {
  it('is one wire in place of 13 strands', () => {
    const cable = cables.find(({ id }) => id === 'cn-250')!;
    if (cable.kind !== 'concentric') throw new Error('expected a concentric cable');
    const { ohmPerKm, gmrM, ringRadiusM } = bundleStrands(cable);
    expect(ringRadiusM / metresPerFoot).toBeCloseTo(0.051079, 6);
    expect(gmrM / metresPerFoot).toBeCloseTo(0.04864, 6);
    expect(ohmPerKm * kmPerMile).toBeCloseTo(1.14402, 5);
  });

  it('is one wire in place of a copper tape', () => {
    const cable = cables.find(({ id }) => id === 'ts-1/0')!;
    if (cable.kind !== 'tape') throw new Error('expected a tape-shield cable');
    const { ohmPerKm, gmrM } = rollTape(cable);
    expect(ohmPerKm * kmPerMile).toBeCloseTo(4.27864, 5);
    expect(gmrM / metresPerFoot).toBeCloseTo(0.036458, 6);
  });
});

/*
 * Small enough for paper: 1 ohm per mile and a GMR of 1 ft, phase and neutral 1 ft apart, so that every ln is ln 1. At
 * 60 Hz over 60 ohm-metres the earth's logarithm is 7.6786: zg = 0.0953016 + j0.1213422·7.6786 = 0.0953016 + j0.9317382.
 * Phase and neutral have 1 + zg each and zg between them: 1 + zg − zg²/(1 + zg) = (1 + 2·zg)/(1 + zg).
 * Times the conjugate of the denominator: 1.1906032·1.0953016 + 1.8634764·0.9317382 = 3.0403418 and
 * 1.8634764·1.0953016 − 1.1906032·0.9317382 = 0.9317382; over 1.0953016² + 0.9317382² = 2.0678217: 1.470311 + j0.450589.
 */
describe('A phase and a neutral with round numbers', () => {
  const wire = { id: 'w', ohmPerKm: 1 / kmPerMile, gmrM: metresPerFoot, diameterM: 0.01 };
  const construction: Construction = {
    id: 'c',
    earthOhmM: 60,
    places: [
      { phase: 'A', xM: 0, yM: 10, conductor: 'w' },
      { phase: 'N', xM: metresPerFoot, yM: 10, conductor: 'w' },
    ],
  };

  it('agree with the calculation on paper', () => {
    const { zPerKm } = compute({ construction, phases: 'A', conductors: [wire] });
    expectWithin(perMile(zPerKm[0]![0]!), [1.470311, 0.450589], 1e-6);
  });

  it('has one impedance in every sequence where there is one phase', () => {
    const { zPerKm, z1, z0 } = compute({ construction, phases: 'A', conductors: [wire] });
    expect(z1).toEqual(zPerKm[0]![0]);
    expect(z0).toEqual(z1);
  });

  it('changes with frequency and earth as the formula says', () => {
    const alone = { ...construction, earthOhmM: 200, places: construction.places.slice(0, 1) };
    const { zPerKm } = compute({ construction: alone, phases: 'A', conductors: [wire], frequencyHz: 50 });
    // 1 + 0.00158836·50 and 0.00202237·50·(7.6786 + ½·ln 4).
    expectWithin(perMile(zPerKm[0]![0]!), [1.079418, 0.846539], 1e-6);
  });
});

/*
 * Three wires without a neutral, GMR 0.01 ft, 0.3 ohms per mile, at 60 Hz. In a row 1 ft apart, the outer two are 2 ft apart:
 * their mutual reactance lies ⅔·0.1213422·ln 2 = 0.0560719 below the mean, and z1 = 0.3 + j0.1213422·ln(2^⅓/0.01) =
 * 0.3 + j0.586838, of size 0.659078: 8.508 %.
 */
describe('How far from transposed a line is', () => {
  const wire = { id: 'w', ohmPerMile: 0.3, gmrFt: 0.01, diameterIn: 0.3 };
  const hung = (spots: readonly [xFt: number, yFt: number][]): ComputedLine => {
    const places = spots.map(([xFt, yFt], index): Place => {
      return { phase: 'ABC'[index] as Place['phase'], xFt, yFt: 30 + yFt, conductor: 'w' };
    });
    const construction = { id: 'c', earthOhmM: 100, places };
    return compute({ construction, phases: 'ABC'.slice(0, spots.length), conductors: [wire] });
  };

  it('is told from the element furthest from its mean, as a share of z1', () => {
    const row = hung([
      [0, 0],
      [1, 0],
      [2, 0],
    ]);
    expect(row.percentFromTransposed).toBeCloseTo(8.508, 3);
  });

  it('is nothing where each phase sees the same', () => {
    const triangle = hung([
      [0, 0],
      [1, 0],
      [0.5, Math.sqrt(0.75)],
    ]);
    expect(triangle.percentFromTransposed).toBeCloseTo(0, 9);
    expect(hung([[0, 0]]).percentFromTransposed).toBe(0);
  });
});
