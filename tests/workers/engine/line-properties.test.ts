import fc from 'fast-check';
import { complex, inv, matrix, type Complex as MathComplex } from 'mathjs';
import { describe, expect, it } from 'vitest';
import type { LineConstants } from '../../../shared/schemas/study-result.ts';
import type { Construction, Impedance, Place, Study } from '../../../shared/schemas/study.ts';
import { buildPrimitiveMatrix, reduceToFirst } from '../../../workers/engine/line-constants.ts';
import { lineCalculator } from '../../../workers/engine/line-impedances.ts';
import { positionOf } from '../../../workers/engine/line-units.ts';
import { listWires } from '../../../workers/engine/line-wires.ts';
import { cables, conductors } from './line-library.ts';

/* Random lines of one to three phases and up to four neutrals, out of the library, at least half a metre apart. */

const frequencyHz = 60;
const library = {
  conductors: new Map(conductors.map((conductor) => [conductor.id, conductor])),
  cables: new Map(cables.map((cable) => [cable.id, cable])),
};

const held = fc.oneof(
  { weight: 3, arbitrary: fc.constantFrom(...conductors).map(({ id }) => ({ conductor: id })) },
  { weight: 1, arbitrary: fc.constantFrom(...cables).map(({ id }) => ({ cable: id })) },
);

const anyPhases = fc.shuffledSubarray(['A', 'B', 'C'], { minLength: 1 });

const randomLine: fc.Arbitrary<{ phases: string; construction: Construction }> = fc
  .record({ phases: anyPhases, neutrals: fc.nat({ max: 4 }), earthOhmM: fc.integer({ min: 10, max: 1000 }) })
  .chain(({ phases, neutrals, earthOhmM }) => {
    const count = phases.length + neutrals;
    const spots = fc.uniqueArray(fc.nat({ max: 400 }), { minLength: count, maxLength: count });
    const holds = fc.array(held, { minLength: count, maxLength: count });
    return fc.record({ spots, holds }).map(({ spots, holds }) => ({
      phases: phases.join(''),
      construction: {
        id: 'c',
        earthOhmM,
        places: spots.map((spot, index) => ({
          phase: (phases[index] ?? 'N') as Place['phase'],
          xM: (spot % 20) / 2,
          yM: Math.floor(spot / 20) / 2,
          ...holds[index],
        })),
      },
    }));
  });

function compute(construction: Construction, phases: string): LineConstants {
  const lists = { conductors, cables, constructions: [construction] };
  const study = { frequencyHz, feeder: { nodes: [], ...lists } } as unknown as Study;
  return lineCalculator(study)({ id: 'l', from: 'a', to: 'b', phases, km: 1, construction: construction.id });
}

const distance = (p: Impedance, q: Impedance) => Math.hypot(p.r - q.r, p.x - q.x);
const size = ({ r, x }: Impedance) => Math.hypot(r, x);

function expectAlike(got: Impedance[][], expected: Impedance[][], relative = 1e-10) {
  got.forEach((row, i) =>
    row.forEach((z, j) =>
      expect(distance(z, expected[i]![j]!)).toBeLessThan(relative * size(expected[i]![i]!)),
    ),
  );
}

describe('A line from its construction', () => {
  it('has a matrix that is symmetric to the last bit, with losses on its diagonal and in z1 and z0', () => {
    fc.assert(
      fc.property(randomLine, ({ construction, phases }) => {
        const { zPerKm, z1, z0 } = compute(construction, phases);
        zPerKm.forEach((row, i) => row.forEach((z, j) => expect(z).toEqual(zPerKm[j]![i])));
        for (const r of [...zPerKm.map((row, i) => row[i]!.r), z1.r, z0.r]) expect(r).toBeGreaterThan(0);
      }),
    );
  });

  it('is what is left of all wires when the admittances of the phases alone are inverted again', () => {
    fc.assert(
      fc.property(randomLine, ({ construction, phases }) => {
        const wires = listWires(construction, phases, library);
        const primitive = buildPrimitiveMatrix(wires, frequencyHz, construction.earthOhmM);
        const all = primitive.map((row) => row.map(({ re, im }) => complex(re, im)));
        const kept = inv(matrix(all)).toArray() as MathComplex[][];
        const block = kept.slice(0, phases.length).map((row) => row.slice(0, phases.length));
        const expected = inv(matrix(block)).toArray() as MathComplex[][];
        const got = reduceToFirst(primitive, phases.length);
        expectAlike(
          got.map((row) => row.map(({ re, im }) => ({ r: re, x: im }))),
          expected.map((row) => row.map(({ re, im }) => ({ r: re, x: im }))),
          1e-8,
        );
      }),
      { numRuns: 50 },
    );
  });

  it('does not change with the order of its places, and follows the order of its phases', () => {
    const shuffled = randomLine.chain(({ construction, phases }) =>
      fc.record({
        construction: fc.constant(construction),
        phases: fc.constant(phases),
        places: fc.shuffledSubarray(construction.places, { minLength: construction.places.length }),
        order: fc.shuffledSubarray([...phases], { minLength: phases.length }),
      }),
    );
    fc.assert(
      fc.property(shuffled, ({ construction, phases, places, order }) => {
        const before = compute(construction, phases);
        const after = compute({ ...construction, places }, order.join(''));
        const permuted = order.map((p) =>
          order.map((q) => before.zPerKm[phases.indexOf(p)]![phases.indexOf(q)]!),
        );
        expectAlike(after.zPerKm, permuted);
        expectAlike([[after.z1]], [[before.z1]]);
        expectAlike([[after.z0]], [[before.z0]]);
      }),
    );
  });

  it('does not change when it is moved, mirrored or hung elsewhere as a whole', () => {
    const move = fc.integer({ min: -50, max: 50 });
    fc.assert(
      fc.property(randomLine, move, move, ({ construction, phases }, xM, yM) => {
        const places = construction.places.map((place): Place => {
          const from = positionOf(place);
          return { ...place, xM: xM - from.xM, yM: yM + from.yM };
        });
        expectAlike(
          compute({ ...construction, places }, phases).zPerKm,
          compute(construction, phases).zPerKm,
        );
      }),
    );
  });

  it('changes little by a neutral far away, the less the further, and not at all by an open phase', () => {
    const neutral = { phase: 'N', yM: 8, conductor: 'acsr-4/0' } as const;
    fc.assert(
      fc.property(randomLine, ({ construction, phases }) => {
        const without = compute(construction, phases).zPerKm;
        const change = (xM: number) => {
          const places = [...construction.places, { ...neutral, xM }];
          const { zPerKm } = compute({ ...construction, places }, phases);
          return Math.max(...zPerKm.flatMap((row, i) => row.map((z, j) => distance(z, without[i]![j]!))));
        };
        // Beyond some 800 m the reactance of the cut equations would change its sign.
        const changes = [30, 100, 300].map(change);
        const largest = Math.max(...without.map((row, i) => size(row[i]!)));
        expect(changes[2]! / largest).toBeLessThan(0.05);
        expect(changes[1]!).toBeLessThan(changes[0]!);
        expect(changes[2]!).toBeLessThan(changes[1]!);
      }),
    );
    fc.assert(
      fc.property(randomLine, ({ construction, phases }) => {
        const open = [...'ABC'].filter((phase) => !phases.includes(phase)) as Place['phase'][];
        const added = open.map((phase, index) => ({ phase, xM: 20 + index, yM: 8, conductor: 'acsr-4/0' }));
        const places = [...construction.places, ...added];
        expectAlike(
          compute({ ...construction, places }, phases).zPerKm,
          compute(construction, phases).zPerKm,
        );
      }),
    );
  });
});
