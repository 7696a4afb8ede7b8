import type { TimeCurve } from '../../shared/schemas/study-utility.ts';
import { risingPairs } from './shape-electrical.ts';
import type { Check } from './shape.ts';
import { checkByNotes, noteProblem, notNegative, object, oneOf, positive } from './shape.ts';

/* The shape of tripping times. */

const inverseKinds = [
  'ieee-moderately-inverse',
  'ieee-very-inverse',
  'ieee-extremely-inverse',
  'iec-standard-inverse',
  'iec-very-inverse',
  'iec-extremely-inverse',
];

const inverse = object(
  { kind: oneOf(...inverseKinds), pickupA: positive, timeDial: positive },
  { instantaneousA: positive, instantaneousS: notNegative },
);

const points = risingPairs(positive, positive);
const shapes: Partial<Record<string, Check>> = {
  'definite-time': object({ kind: oneOf('definite-time'), pickupA: positive, timeS: notNegative }),
  fuse: object({ kind: oneOf('fuse'), minimumMelt: points, totalClear: points }),
};

const kind = oneOf(...inverseKinds, ...Object.keys(shapes));

/** An inverse-time curve by its name, one time above a pickup, or a fuse's two curves by their points. */
export const timeCurve = checkByNotes((value, place, problems) => {
  if (typeof value !== 'object' || value === null) return noteProblem(problems, place, value, 'an object');
  const given = (value as Partial<TimeCurve>).kind;
  if (!kind.accepts(given)) return kind(given, { parent: place, key: 'kind' }, problems);
  const shape = shapes[given!] ?? inverse;
  shape(value, place, problems);
});
