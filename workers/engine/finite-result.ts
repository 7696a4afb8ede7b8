import type { Place, Problem } from './shape.ts';
import { pointerOf, wholeFile } from './shape.ts';

const expected =
  'a finite number in the result; a size in the study is too small or too large to compute with';

/**
 * Every number of a result that is not finite, with the JSON pointer of its place in the result. Such a result is none:
 * JSON prints the number as null, and no database keeps it. It comes of sizes with which the arithmetic runs over.
 */
export function listNotFinite(result: unknown): Problem[] {
  const problems: Problem[] = [];
  const visit = (value: unknown, place: Place): void => {
    if (typeof value === 'number' && !Number.isFinite(value)) {
      problems.push({ pointer: pointerOf(place), got: String(value), expected });
    } else if (typeof value === 'object' && value !== null) {
      for (const [key, child] of Object.entries(value)) visit(child, { parent: place, key });
    }
  };
  visit(result, wholeFile);
  return problems;
}
