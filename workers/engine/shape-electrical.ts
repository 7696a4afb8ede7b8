import type { Impedance } from '../../shared/schemas/study.ts';
import type { Check } from './shape.ts';
import {
  check,
  checkByNotes,
  expect,
  matching,
  noteProblem,
  notNegative,
  number,
  object,
  pointerOf,
} from './shape.ts';

/* Shapes that many kinds of elements share: phases, impedances, connections, pairs and curves of pairs. */

const phaseTexts = new Set(
  ['A', 'B', 'C', 'AB', 'BA', 'BC', 'CB', 'CA', 'AC'].concat(['ABC', 'ACB', 'BAC', 'BCA', 'CAB', 'CBA']),
);
export const phases = expect('phases out of A, B and C, each at most once', (value) =>
  phaseTexts.has(value as string),
);

/** In ohms, or ohms per km: what is smaller was left over by a subtraction. */
const smallestImpedance = 1e-12;

const notZero = check(
  (value) => {
    const { r, x } = value as Impedance;
    return r >= smallestImpedance || Math.abs(x) >= smallestImpedance;
  },
  (value, place, problems) => {
    if (notZero.accepts(value)) return;
    problems.add(() => ({
      pointer: pointerOf(place),
      got: 'zero impedance',
      expected: 'an impedance other than zero',
    }));
  },
);

/** Of a line: the reactance may be negative (star equivalents, series capacitors), the resistance not. */
export const lineImpedance = object({ r: notNegative, x: number }, {}, notZero);
export const impedance = object({ r: notNegative, x: notNegative }, {}, notZero);
/** Of what may be so short that it has none. */
export const anyImpedance = object({ r: notNegative, x: notNegative });

export const neutral = checkByNotes((value, place, problems) => {
  if (value === 'solid' || value === 'ungrounded') return;
  if (typeof value === 'object' && value !== null) anyImpedance(value, place, problems);
  else noteProblem(problems, place, value, '"solid", "ungrounded" or an impedance');
});

/** Star to star and delta to delta keep the clock at 0; a star on one side alone turns it to 1 or 11. */
export const connection = matching(
  /^((YN|Y)(yn|y)0|Dd0|(YN|Y)d(1|11)|D(yn|y)(1|11))$/,
  'a connection such as "Dyn1", "YNd11", "YNyn0" or "Dd0"',
);

export const wholeNumber = expect(
  'a whole number of 1 or more',
  (value) => Number.isInteger(value) && Number(value) > 0,
);

/** A pair such as [lng, lat]. */
export function pair(first: Check, second: Check): Check {
  const isPair = (value: unknown): value is unknown[] => Array.isArray(value) && value.length === 2;
  const accepts = (value: unknown) => isPair(value) && first.accepts(value[0]) && second.accepts(value[1]);
  return check(accepts, (value, place, problems) => {
    if (!isPair(value)) return noteProblem(problems, place, value, 'a list of two numbers');
    first(value[0], { parent: place, key: 0 }, problems);
    second(value[1], { parent: place, key: 1 }, problems);
  });
}

/** Two pairs at least, each with a larger first number than the one before it. */
export function risingPairs(first: Check, second: Check): Check {
  const item = pair(first, second);
  const isList = (value: unknown): value is [number, number][] => Array.isArray(value) && value.length >= 2;
  const rises = (points: [number, number][], index: number) =>
    index === 0 || points[index]![0] > points[index - 1]![0];
  const accepts = (value: unknown) =>
    isList(value) && value.every((each, index) => item.accepts(each) && rises(value, index));
  return check(accepts, (value, place, problems) => {
    if (!isList(value)) return noteProblem(problems, place, value, 'a list of at least 2 pairs');
    const before = problems.length;
    value.forEach((each, key) => item(each, { parent: place, key }, problems));
    if (problems.length > before) return;
    value.forEach((each, key) => {
      if (rises(value, key)) return;
      const at = { parent: { parent: place, key }, key: 0 };
      noteProblem(problems, at, each[0], `a number above ${value[key - 1]![0]}: the pairs rise`);
    });
  });
}
