import { check, listOf, name, noteProblem, object, text, truth } from './shape.ts';

/* The shape of an operating case that a study lists. */

const isObject = (value: unknown): value is Record<string, unknown> =>
  typeof value === 'object' && value !== null && !Array.isArray(value);

/** Positions of switches by their ids. */
const positions = check(
  (value) => isObject(value) && Object.values(value).every((closed) => truth.accepts(closed)),
  (value, place, problems) => {
    if (!isObject(value)) return noteProblem(problems, place, value, 'an object');
    for (const [key, closed] of Object.entries(value)) truth(closed, { parent: place, key }, problems);
  },
);

export const scenario = object({ id: name }, { name: text, switches: positions, out: listOf(name) });
