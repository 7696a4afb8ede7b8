import fc from 'fast-check';
import { describe, expect, it } from 'vitest';
import type { ConcentricCable, Conductor, Line, Study } from '../../../shared/schemas/study.ts';
import { reportLines } from '../../../workers/engine/line-results.ts';
import { listProblems } from '../../../workers/engine/problems.ts';
import { readStudy } from '../../../workers/engine/read-study.ts';
import { readCase } from './cases.ts';

const base = readCase('thirteen-node');

function problemsOf(spoil: (feeder: Study['feeder']) => void): string[] {
  const study = structuredClone(base);
  spoil(study.feeder);
  const read = readStudy(JSON.stringify(study));
  if (!('problems' in read)) return [];
  return listProblems(read.problems);
}

const lines = (feeder: Study['feeder']) => feeder.lines!;
const placesOf = (feeder: Study['feeder'], index = 0) => feeder.constructions![index]!.places;
const ohms = { r: 0.1, x: 0.4 };
const construction = '/feeder/constructions/0';

type Spoil = (feeder: Study['feeder']) => void;
const spoils: { name: string; spoil: Spoil; problem: string }[] = [
  {
    name: 'a construction that is not there',
    spoil: (feeder) => (lines(feeder)[2]!.construction = '999'),
    problem: '/feeder/lines/2/construction: got "999", expected the id of a construction of the feeder',
  },
  {
    name: 'a conductor that is not there',
    spoil: (feeder) => (placesOf(feeder)[3]!.conductor = 'string'),
    problem: `${construction}/places/3/conductor: got "string", expected the id of a conductor of the feeder`,
  },
  {
    name: 'a cable that is not there',
    spoil: (feeder) => (placesOf(feeder, 5)[1]!.cable = 'acsr-1/0'),
    problem:
      '/feeder/constructions/5/places/1/cable: got "acsr-1/0", expected the id of a cable of the feeder',
  },
  {
    name: 'phases that the construction lacks',
    spoil: (feeder) => (lines(feeder)[0]!.construction = '604'),
    problem: '/feeder/lines/0/construction: got "604" with AC, expected a construction with phases ABC',
  },
  {
    name: 'a construction of neutrals alone',
    spoil: (feeder) => placesOf(feeder, 4).splice(0, 1),
    problem: '/feeder/lines/7/construction: got "605" with no phases, expected a construction with phases C',
  },
  {
    name: 'no places',
    spoil: (feeder) => (feeder.constructions![0]!.places = []),
    problem: `${construction}/places: got a list of 0, expected a list of at least 1`,
  },
  {
    name: 'more places than any line has',
    spoil: (feeder) => {
      const place = placesOf(feeder)[3]!;
      feeder.constructions![0]!.places = Array.from({ length: 25 }, (_, xFt) => ({ ...place, xFt }));
    },
    problem: `${construction}/places: got a list of 25, expected a list of at most 24`,
  },
  {
    name: 'two places at one point',
    spoil: (feeder) => Object.assign(placesOf(feeder)[2]!, { xFt: 2.5, yFt: 28 }),
    problem:
      `${construction}/places/2: got the point of ${construction}/places/1, ` +
      'expected a point of its own, more than 11.77 mm away (the larger radius)',
  },
  {
    name: 'two places at one point of which one holds nothing known',
    spoil: (feeder) =>
      Object.assign(placesOf(feeder)[0]!, { ...placesOf(feeder)[1]!, phase: 'B', conductor: '?' }),
    problem:
      `${construction}/places/1: got the point of ${construction}/places/0, ` +
      'expected a point of its own, more than 11.77 mm away (the larger radius)',
  },
  {
    name: 'a conductor inside another, as when feet pass for metres',
    spoil: (feeder) => Object.assign(placesOf(feeder, 6)[1]!, { xFt: 0.0328084 }),
    problem:
      '/feeder/constructions/6/places/1: got 10 mm from /feeder/constructions/6/places/0, ' +
      'expected a point of its own, more than 11.18 mm away (the larger radius)',
  },
  {
    name: 'a phase twice',
    spoil: (feeder) => (placesOf(feeder)[2]!.phase = 'A'),
    problem: `${construction}/places/2/phase: got "A", expected each phase once (${construction}/places/1 is this one)`,
  },
  {
    name: 'a place far from anything',
    spoil: (feeder) => Object.assign(placesOf(feeder)[0]!, { yFt: 28_000 }),
    problem: `${construction}/places/0/yFt: got 28000, expected a number from -3000 to 3000`,
  },
  {
    name: 'a phase that is none',
    spoil: (feeder) => Object.assign(placesOf(feeder)[0]!, { phase: 'G' }),
    problem: `${construction}/places/0/phase: got "G", expected "A" or "B" or "C" or "N"`,
  },
  {
    name: 'a place with both conductor and cable',
    spoil: (feeder) => (placesOf(feeder)[0]!.cable = 'cn-250'),
    problem: `${construction}/places/0: got both conductor and cable, expected a conductor or a cable`,
  },
  {
    name: 'a place with neither',
    spoil: (feeder) => delete placesOf(feeder)[0]!.conductor,
    problem: `${construction}/places/0: got neither conductor nor cable, expected a conductor or a cable`,
  },
  {
    name: 'a conductor without size',
    spoil: (feeder) => Object.assign(feeder.conductors![0]!, { gmrFt: 0 }),
    problem: '/feeder/conductors/0/gmrFt: got 0, expected a number above 0',
  },
  {
    name: 'a conductor of negative diameter',
    spoil: (feeder) => Object.assign(feeder.conductors![1]!, { diameterIn: -0.01 }),
    problem: '/feeder/conductors/1/diameterIn: got -0.01, expected a number above 0',
  },
  {
    name: 'a conductor in both kinds of units',
    spoil: (feeder) => Object.assign(feeder.conductors![0]!, { ohmPerKm: 0.7 }),
    problem:
      '/feeder/conductors/0/ohmPerKm: got 0.7, expected no such field (known: id, ohmPerMile, gmrFt, diameterIn)',
  },
  {
    name: 'a conductor with nothing said of it',
    spoil: (feeder) => (feeder.conductors![0] = { id: 'acsr-1/0' } as Conductor),
    problem: '/feeder/conductors/0/gmrM: got nothing, expected a number above 0',
  },
  {
    name: 'half a strand',
    spoil: (feeder) => ((feeder.cables![0] as ConcentricCable).strands = 12.5),
    problem: '/feeder/cables/0/strands: got 12.5, expected a whole number of 1 or more',
  },
  {
    name: 'a strand of no resistance',
    spoil: (feeder) => Object.assign((feeder.cables![0] as ConcentricCable).strand, { ohmPerMile: 0 }),
    problem: '/feeder/cables/0/strand/ohmPerMile: got 0, expected a number above 0',
  },
  {
    name: 'strands that leave the core no room',
    spoil: (feeder) => Object.assign(feeder.cables![0]!, { outsideDiameterIn: 0.6 }),
    problem:
      '/feeder/cables/0/outsideDiameterIn: got 0.6, expected room for the core and what lies around it',
  },
  {
    name: 'a tape that leaves the core no room',
    spoil: (feeder) => Object.assign(feeder.cables![1]!, { tapeThicknessMil: 300 }),
    problem:
      '/feeder/cables/1/shieldDiameterIn: got 0.88, expected room for the core and what lies around it',
  },
  {
    name: 'a cable of another kind',
    spoil: (feeder) => Object.assign(feeder.cables![0]!, { kind: 'coaxial' }),
    problem: '/feeder/cables/0/kind: got "coaxial", expected "concentric" or "tape"',
  },
  {
    name: 'nothing for a cable',
    spoil: (feeder) => Object.assign(feeder.cables!, { 0: null }),
    problem: '/feeder/cables/0: got null, expected an object',
  },
  {
    name: 'a field of the other kind of cable',
    spoil: (feeder) => Object.assign(feeder.cables![1]!, { strands: 3 }),
    problem:
      '/feeder/cables/1/strands: got 3, ' +
      'expected no such field (known: id, core, kind, shieldDiameterIn, tapeThicknessMil)',
  },
  {
    name: 'earth without resistivity',
    spoil: (feeder) => (feeder.constructions![0]!.earthOhmM = 0),
    problem: `${construction}/earthOhmM: got 0, expected a number above 0`,
  },
  {
    name: 'one id for two constructions',
    spoil: (feeder) => (feeder.constructions![1]!.id = '601'),
    problem: `/feeder/constructions/1/id: got "601", expected an id of its own (${construction} has this one)`,
  },
  {
    name: 'a line with both impedances and construction',
    spoil: (feeder) => Object.assign(lines(feeder)[0]!, { z1: ohms, z0: ohms }),
    problem:
      '/feeder/lines/0/construction: got "601", expected no construction beside z1 and z0: one or the other',
  },
  {
    name: 'a line with one impedance beside its construction',
    spoil: (feeder) => Object.assign(lines(feeder)[0]!, { z0: ohms }),
    problem: '/feeder/lines/0/construction: got "601", expected no construction beside z0: one or the other',
  },
  {
    name: 'a line with neither',
    spoil: (feeder) => delete lines(feeder)[0]!.construction,
    problem: '/feeder/lines/0/z1: got nothing, expected an impedance per km (or a construction in its place)',
  },
  {
    name: 'a line with half its impedances',
    spoil: (feeder) => {
      const line: Line = lines(feeder)[0]!;
      delete line.construction;
      line.z1 = ohms;
    },
    problem: '/feeder/lines/0/z0: got nothing, expected an impedance per km (or a construction in its place)',
  },
];

const step = (holder: unknown, key: string) => (holder as Record<string, unknown>)[key];

/** The keys on the way to everything within. */
function listPaths(value: unknown, path: string[] = []): string[][] {
  if (typeof value !== 'object' || value === null) return [path];
  const within = Object.entries(value).flatMap(([key, inner]) => listPaths(inner, [...path, key]));
  return path.length > 0 ? [path, ...within] : within;
}

describe('Reading lines from constructions', () => {
  it('takes a sound file', () => {
    expect(problemsOf(() => undefined)).toEqual([]);
  });

  it.each(spoils)('names the place, what is there and what was expected: $name', ({ spoil, problem }) => {
    expect(problemsOf(spoil)).toContain(problem);
  });

  it('never throws, whatever stands anywhere, and gives what it takes finite impedances', () => {
    const { conductors, cables, constructions, lines } = base.feeder;
    const paths = listPaths({ conductors, cables, constructions, lines });
    const anything = fc.oneof(fc.jsonValue(), fc.constantFrom(0, 1e-15, 1e15, -1e15, 24, 'A', 'N', '601'));
    fc.assert(
      fc.property(fc.constantFrom(...paths), anything, (path, value) => {
        const study = structuredClone(base);
        const holder = path.slice(0, -1).reduce<unknown>(step, study.feeder);
        (holder as Record<string, unknown>)[path.at(-1)!] = value;
        const read = readStudy(JSON.stringify(study));
        if ('problems' in read) return;
        for (const { z1, z0 } of Object.values(reportLines(read.study).lines ?? {})) {
          for (const part of [z1.r, z1.x, z0.r, z0.x]) expect(part).toSatisfy(Number.isFinite);
        }
      }),
      { numRuns: 2000 },
    );
  });

  it('takes a line with fewer phases than its construction, and in another order', () => {
    expect(problemsOf((feeder) => (lines(feeder)[8]!.construction = '601'))).toEqual([]);
    expect(problemsOf((feeder) => (lines(feeder)[0]!.phases = 'CAB'))).toEqual([]);
  });

  it('takes cables that touch', () => {
    const touch: Spoil = (feeder) =>
      placesOf(feeder, 5).forEach((place, index) => Object.assign(place, { xFt: (index * 1.29) / 12 }));
    expect(problemsOf(touch)).toEqual([]);
  });
});
