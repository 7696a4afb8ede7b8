/*
 * What a JSON value must look like, as small checks that are put together. A check notes every problem with the JSON
 * pointer of the place (RFC 6901), what is there and what was expected; it never throws.
 */

export type Problem = { pointer: string; got: string; expected: string };

/** A place in the file; its pointer is only spelt out when there is a problem. */
export type Place = { parent: Place | null; key: string | number };

/** Checks the value at a place. */
export type Check = (value: unknown, place: Place, problems: Problem[]) => void;

export const wholeFile: Place = { parent: null, key: '' };

export function pointerOf(place: Place): string {
  const keys: string[] = [];
  for (let p = place; p.parent; p = p.parent) keys.unshift(escapeKey(String(p.key)));
  return keys.length === 0 ? '/' : `/${keys.join('/')}`;
}

/** Also escapes control characters, so that a problem stays on one line. */
function escapeKey(key: string): string {
  return JSON.stringify(key).slice(1, -1).replaceAll('~', '~0').replaceAll('/', '~1');
}

/** Says in a few words what is there. */
export function describeValue(value: unknown): string {
  if (value === undefined) return 'nothing';
  if (typeof value === 'string') return JSON.stringify(value.length > 60 ? `${value.slice(0, 60)}…` : value);
  if (Array.isArray(value)) return `a list of ${value.length}`;
  return typeof value === 'object' && value !== null ? 'an object' : String(value);
}

/** Makes a check of a yes-or-no question. */
export function expect(expected: string, isRight: (value: unknown) => boolean): Check {
  return (value, place, problems) => {
    if (!isRight(value)) problems.push({ pointer: pointerOf(place), got: describeValue(value), expected });
  };
}

const isNumber = (value: unknown): value is number => typeof value === 'number' && Number.isFinite(value);

export const text = expect('a text', (value) => typeof value === 'string');
export const name = expect('a text that is not empty', (value) => typeof value === 'string' && value !== '');
export const truth = expect('true or false', (value) => typeof value === 'boolean');
export const number = expect('a finite number', isNumber);
export const positive = expect('a number above 0', (value) => isNumber(value) && value > 0);
export const notNegative = expect('a number of 0 or more', (value) => isNumber(value) && value >= 0);

export function between(low: number, high: number): Check {
  return expect(
    `a number from ${low} to ${high}`,
    (value) => isNumber(value) && value >= low && value <= high,
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

export function listOf(item: Check, fewest = 0): Check {
  return (value, place, problems) => {
    if (!Array.isArray(value) || value.length < fewest) {
      const expected = fewest === 0 ? 'a list' : `a list of at least ${fewest}`;
      problems.push({ pointer: pointerOf(place), got: describeValue(value), expected });
      return;
    }
    for (let index = 0; index < value.length; index++)
      item(value[index], { parent: place, key: index }, problems);
  };
}

export type Fields = Readonly<Record<string, Check>>;

/** An object with all of `required`, any of `optional`, and nothing else; `also` sees it when its fields are right. */
export function object(required: Fields, optional: Fields = {}, also?: Check): Check {
  const checks = new Map([...Object.entries(required), ...Object.entries(optional)]);
  const requiredKeys = Object.keys(required);
  return (value, place, problems) => {
    if (typeof value !== 'object' || value === null || Array.isArray(value)) {
      problems.push({ pointer: pointerOf(place), got: describeValue(value), expected: 'an object' });
      return;
    }
    const before = problems.length;
    const fields = value as Record<string, unknown>;
    for (const key of requiredKeys) {
      if (!Object.hasOwn(fields, key)) checks.get(key)!(undefined, { parent: place, key }, problems);
    }
    for (const key of Object.keys(fields)) {
      const check = checks.get(key) ?? unknownField(checks);
      check(fields[key], { parent: place, key }, problems);
    }
    if (problems.length === before) also?.(value, place, problems);
  };
}

function unknownField(known: ReadonlyMap<string, Check>): Check {
  return expect(`no such field (known: ${[...known.keys()].join(', ')})`, () => false);
}
