import { Problems, describeValue, escapeKey } from './problems.ts';

/*
 * What a JSON value must look like, as small checks that are put together. A check notes every problem with a value and
 * never throws. It knows a sound value at less expense, by `accepts`, which neither notes nor allocates anything: a sound
 * file is walked once and that is all, and of a spoilt list only the spoilt items are looked at again.
 */

/** A place in the file; its pointer is only spelt out when there is a problem. */
export type Place = { parent: Place | null; key: string | number };

export type Check = {
  /** Notes the problems with the value at a place. */
  (value: unknown, place: Place, problems: Problems): void;
  /** Whether there are none. */
  accepts(value: unknown): boolean;
};

export const wholeFile: Place = { parent: null, key: '' };

export function pointerOf(place: Place): string {
  const keys: string[] = [];
  for (let p = place; p.parent; p = p.parent) keys.push(escapeKey(String(p.key)));
  return keys.length === 0 ? '/' : `/${keys.reverse().join('/')}`;
}

/** Makes a check of the two ways to say it. */
export function check(accepts: (value: unknown) => boolean, note: (...at: Parameters<Check>) => void): Check {
  return Object.assign((...at: Parameters<Check>) => note(...at), { accepts });
}

/** Makes a check of one way to say it: for what is few in a file. */
export function checkByNotes(note: (...at: Parameters<Check>) => void): Check {
  return check((value) => {
    const problems = new Problems();
    note(value, wholeFile, problems);
    return problems.length === 0;
  }, note);
}

export function noteProblem(problems: Problems, place: Place, value: unknown, expected: string): void {
  problems.add(() => ({ pointer: pointerOf(place), got: describeValue(value), expected }));
}

/** Makes a check of a yes-or-no question. */
export function expect(expected: string, isRight: (value: unknown) => boolean): Check {
  return check(isRight, (value, place, problems) => {
    if (!isRight(value)) noteProblem(problems, place, value, expected);
  });
}

/** Bounds beyond any quantity of a network, within which products of several numbers stay finite and above 0. */
const largest = 1e15;
const smallest = 1e-15;

/** A number within the bounds; where the sign alone is right, `expected` gives way to the bounds. */
function numberThat(expected: string, isRight: (value: number) => boolean, least: number): Check {
  const accepts = (value: unknown) =>
    typeof value === 'number' && value >= least && value <= largest && isRight(value);
  const bounds = `a number from ${least} to ${largest.toExponential(0)}`;
  return check(accepts, (value, place, problems) => {
    if (accepts(value)) return;
    const isFar = typeof value === 'number' && Number.isFinite(value) && isRight(value);
    noteProblem(problems, place, value, isFar ? bounds : expected);
  });
}

export const text = expect('a text', (value) => typeof value === 'string');
export const name = expect('a text that is not empty', (value) => typeof value === 'string' && value !== '');
export const truth = expect('true or false', (value) => typeof value === 'boolean');
export const number = numberThat('a finite number', () => true, -largest);
export const positive = numberThat('a number above 0', (value) => value > 0, smallest);
export const notNegative = numberThat('a number of 0 or more', (value) => value >= 0, 0);

export function between(low: number, high: number): Check {
  return expect(
    `a number from ${low} to ${high}`,
    (value) => typeof value === 'number' && value >= low && value <= high,
  );
}

export function oneOf(...choices: readonly string[]): Check {
  return expect(choices.map((choice) => `"${choice}"`).join(' or '), (value) =>
    choices.includes(value as string),
  );
}

export function matching(pattern: RegExp, expected: string): Check {
  return expect(expected, (value) => typeof value === 'string' && pattern.test(value));
}

export function listOf(item: Check, fewest = 0, most = Infinity): Check {
  const isList = (value: unknown): value is unknown[] =>
    Array.isArray(value) && value.length >= fewest && value.length <= most;
  const least = fewest === 0 ? 'a list' : `a list of at least ${fewest}`;
  const accepts = (value: unknown) => {
    if (!isList(value)) return false;
    for (let index = 0; index < value.length; index++) if (!item.accepts(value[index])) return false;
    return true;
  };
  return check(accepts, (value, place, problems) => {
    if (!isList(value)) {
      const isLong = Array.isArray(value) && value.length > most;
      noteProblem(problems, place, value, isLong ? `a list of at most ${most}` : least);
      return;
    }
    for (let index = 0; index < value.length; index++) {
      if (!item.accepts(value[index])) item(value[index], { parent: place, key: index }, problems);
    }
  });
}

export type Fields = Readonly<Record<string, Check>>;

/** An object with all of `required`, any of `optional`, and nothing else; `also` sees it when its fields are right. */
export function object(required: Fields, optional: Fields = {}, also?: Check): Check {
  const checks = new Map([...Object.entries(required), ...Object.entries(optional)]);
  const requiredKeys = Object.keys(required);
  const isRequired = new Set(requiredKeys);
  const fields = new Map(
    Array.from(checks, ([key, { accepts }]) => [key, { accepts, counts: isRequired.has(key) ? 1 : 0 }]),
  );
  const unknownField = expect(`no such field (known: ${[...checks.keys()].join(', ')})`, () => false);

  const accepts = (value: unknown) => {
    if (!isObject(value)) return false;
    let missing = requiredKeys.length;
    // What JSON.parse makes inherits nothing that this loop would see.
    for (const key in value) {
      const field = fields.get(key);
      if (field === undefined || !field.accepts(value[key])) return false;
      missing -= field.counts;
    }
    return missing === 0 && (also === undefined || also.accepts(value));
  };
  return check(accepts, (value, place, problems) => {
    if (!isObject(value)) return noteProblem(problems, place, value, 'an object');
    const before = problems.length;
    for (const key of requiredKeys) {
      if (!Object.hasOwn(value, key)) checks.get(key)!(undefined, { parent: place, key }, problems);
    }
    for (const key of Object.keys(value)) {
      const field = checks.get(key) ?? unknownField;
      if (!field.accepts(value[key])) field(value[key], { parent: place, key }, problems);
    }
    if (problems.length === before) also?.(value, place, problems);
  });
}

function isObject(value: unknown): value is Record<string, unknown> {
  return typeof value === 'object' && value !== null && !Array.isArray(value);
}
