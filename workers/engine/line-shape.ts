import type { Cable, Line, Place } from '../../shared/schemas/study.ts';
import { conductorSizes, outsideDiameterM, tapeSizes } from './line-units.ts';
import { wholeNumber } from './shape-electrical.ts';
import type { Check, Fields } from './shape.ts';
import {
  between,
  check,
  checkByNotes,
  listOf,
  name,
  noteProblem,
  object,
  oneOf,
  pointerOf,
  positive,
} from './shape.ts';

/* The shape of what lines are built from: conductors, cables and where they hang or lie. */

/** More than any pole carries; it bounds the work that a spoilt file can ask for. */
const mostPlaces = 24;

/** Sizes in metric or in US units; the US check speaks where any of its fields is there. */
function inEitherUnits(metric: Check, us: Check, ...usKeys: readonly string[]): Check {
  const choose = (value: unknown) =>
    typeof value === 'object' && value !== null && usKeys.some((key) => Object.hasOwn(value, key))
      ? us
      : metric;
  return check(
    (value) => choose(value).accepts(value),
    (value, place, problems) => choose(value)(value, place, problems),
  );
}

const metricConductor = { ohmPerKm: positive, gmrM: positive, diameterM: positive };
const usConductor = { ohmPerMile: positive, gmrFt: positive, diameterIn: positive };
const conductorWith = (fields: Fields) =>
  inEitherUnits(
    object({ ...fields, ...metricConductor }),
    object({ ...fields, ...usConductor }),
    ...Object.keys(usConductor),
  );
const bare = conductorWith({});

/** The core must fit into what lies around it; a strand may press into it by half, as rounded sizes do. */
const coreFits = checkByNotes((value, place, problems) => {
  const cable = value as Cable;
  const roomM =
    cable.kind === 'concentric'
      ? outsideDiameterM(cable) - conductorSizes(cable.strand).diameterM
      : tapeSizes(cable).shieldDiameterM - 2 * tapeSizes(cable).tapeThicknessM;
  if (roomM >= conductorSizes(cable.core).diameterM) return;
  const keys = ['outsideDiameterM', 'outsideDiameterIn', 'shieldDiameterM', 'shieldDiameterIn'] as const;
  const key = keys.find((known) => known in cable)!;
  const outer = (cable as Partial<Record<typeof key, number>>)[key];
  noteProblem(problems, { parent: place, key }, outer, 'room for the core and what lies around it');
});

const cableWith = (fields: Fields) => object({ id: name, core: bare, ...fields }, {}, coreFits);
const concentric = { kind: oneOf('concentric'), strands: wholeNumber, strand: bare };
const tape = { kind: oneOf('tape') };
const cableKinds: Record<string, Check> = {
  concentric: inEitherUnits(
    cableWith({ ...concentric, outsideDiameterM: positive }),
    cableWith({ ...concentric, outsideDiameterIn: positive }),
    'outsideDiameterIn',
  ),
  tape: inEitherUnits(
    cableWith({ ...tape, shieldDiameterM: positive, tapeThicknessM: positive }),
    cableWith({ ...tape, shieldDiameterIn: positive, tapeThicknessMil: positive }),
    'shieldDiameterIn',
    'tapeThicknessMil',
  ),
};
const kind = oneOf(...Object.keys(cableKinds));

const cable = checkByNotes((value, place, problems) => {
  const given = typeof value === 'object' && value !== null ? (value as Partial<Cable>).kind : undefined;
  if (given !== undefined && Object.hasOwn(cableKinds, given)) cableKinds[given]!(value, place, problems);
  else if (typeof value === 'object' && value !== null) kind(given, { parent: place, key: 'kind' }, problems);
  else noteProblem(problems, place, value, 'an object');
});

const oneWire = checkByNotes((value, place, problems) => {
  const { conductor, cable } = value as Place;
  if ((conductor === undefined) !== (cable === undefined)) return;
  const got = conductor === undefined ? 'neither conductor nor cable' : 'both conductor and cable';
  problems.push({ pointer: pointerOf(place), got, expected: 'a conductor or a cable' });
});

/** Far enough for any line, near enough for Carson's equations as they are used here. */
const metres = between(-1000, 1000);
const feet = between(-3000, 3000);

const placeWith = (position: Fields) =>
  object({ phase: oneOf('A', 'B', 'C', 'N'), ...position }, { conductor: name, cable: name }, oneWire);
const place = inEitherUnits(
  placeWith({ xM: metres, yM: metres }),
  placeWith({ xFt: feet, yFt: feet }),
  'xFt',
  'yFt',
);

export const constructionLists = {
  conductors: listOf(conductorWith({ id: name })),
  cables: listOf(cable),
  constructions: listOf(object({ id: name, earthOhmM: positive, places: listOf(place, 1, mostPlaces) })),
};

/** A line says its impedances or what it is built from, not both. */
export const impedanceOrConstruction = check(
  (value) => {
    const { z1, z0, construction } = value as Partial<Line>;
    const isBuilt = construction !== undefined;
    return (z1 === undefined) === isBuilt && (z0 === undefined) === isBuilt;
  },
  (value, where, problems) => {
    if (typeof value !== 'object' || value === null || Array.isArray(value)) return;
    const line = value as Partial<Line>;
    const note = (key: keyof Line, expected: string) => {
      noteProblem(problems, { parent: where, key }, line[key], expected);
    };
    const given = (['z1', 'z0'] as const).filter((key) => line[key] !== undefined);
    if (line.construction !== undefined && given.length > 0) {
      note('construction', `no construction beside ${given.join(' and ')}: one or the other`);
    }
    if (line.construction !== undefined) return;
    for (const key of ['z1', 'z0'] as const) {
      if (line[key] === undefined) note(key, 'an impedance per km (or a construction in its place)');
    }
  },
);
