import { escapeKey, Problems } from './problems.ts';

const expected =
  'a finite number in the result; a size in the study is too small or too large to compute with';

/**
 * Every number of a result that is not finite, with the JSON pointer of its place in the result. Such a result is none:
 * JSON prints the number as null, and no database keeps it. It comes of sizes with which the arithmetic runs over.
 */
export function listNotFinite(result: unknown): Problems {
  const problems = new Problems();
  if (!isFinite(result)) collect(result, '', problems);
  return problems;
}

/** Without a pointer or an object for any place: a sound result has millions of numbers. */
function isFinite(value: unknown): boolean {
  if (typeof value === 'number') return Number.isFinite(value);
  if (typeof value !== 'object' || value === null) return true;
  for (const key in value) if (!isFinite((value as Record<string, unknown>)[key])) return false;
  return true;
}

function collect(value: unknown, pointer: string, problems: Problems): void {
  if (typeof value === 'number' && !Number.isFinite(value)) {
    problems.push({ pointer, got: String(value), expected });
  } else if (typeof value === 'object' && value !== null) {
    for (const [key, child] of Object.entries(value))
      collect(child, `${pointer}/${escapeKey(key)}`, problems);
  }
}
