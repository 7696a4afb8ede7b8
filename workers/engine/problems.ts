/* What is wrong with a file, with the JSON pointer of the place (RFC 6901), what is there and what was expected. */

export type Problem = { pointer: string; got: string; expected: string };

/** As many problems as anyone reads; a spoilt file can have millions. */
const mostKept = 200;

/** Keeps the first problems and counts all. */
export class Problems {
  readonly first: Problem[] = [];
  private count = 0;

  get length(): number {
    return this.count;
  }

  push(problem: Problem): void {
    this.add(() => problem);
  }

  /** Adds a problem that is only spelt out when it is among the first. */
  add(spell: () => Problem): void {
    if (this.count++ < mostKept) this.first.push(spell());
  }
}

/** One line for each problem that was kept, then how many more there are. */
export function listProblems(problems: Problems): string[] {
  const lines = problems.first.map(
    ({ pointer, got, expected }) => `${pointer}: got ${got}, expected ${expected}`,
  );
  const more = problems.length - lines.length;
  if (more > 0) lines.push(`and ${more} more ${more === 1 ? 'problem' : 'problems'}`);
  return lines;
}

const longestText = 60;
const longestKey = 200;

/** Says in a few words what is there. */
export function describeValue(value: unknown): string {
  if (value === undefined) return 'nothing';
  if (typeof value === 'string') return escapeText(JSON.stringify(shorten(value, longestText)));
  if (Array.isArray(value)) return `a list of ${value.length}`;
  return typeof value === 'object' && value !== null ? 'an object' : String(value);
}

/** A key as a JSON pointer writes it, shortened where it is endless. */
export function escapeKey(key: string): string {
  return escapeText(shorten(key, longestKey)).replaceAll('~', '~0').replaceAll('/', '~1');
}

/** Controls, line separators and marks that turn the direction of writing: none of them may break or disguise a line. */
const unprintable =
  /[\u0000-\u001f\u007f-\u009f\u061c\u200e\u200f\u2028-\u202e\u2066-\u2069\ufeff]|\p{Surrogate}/gu;

/** What is no plain text, as JSON escapes it; nothing else changes. */
export function escapeText(text: string): string {
  return text.replace(unprintable, (mark) => {
    const asInJson = JSON.stringify(mark).slice(1, -1);
    return asInJson === mark ? `\\u${mark.charCodeAt(0).toString(16).padStart(4, '0')}` : asInJson;
  });
}

function shorten(text: string, length: number): string {
  return text.length > length ? `${text.slice(0, length)}…` : text;
}
