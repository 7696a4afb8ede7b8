import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { listProblems } from '../../../workers/engine/problems.ts';
import { checkStudy } from '../../../workers/engine/read-study.ts';
import { fixtures } from './cases.ts';

/* A sound study file, and ways to spoil it. */

export const soundText = readFileSync(join(fixtures, 'invalid', 'base.json'), 'utf8');

export type Change = { set?: Record<string, unknown>; remove?: readonly string[] };

/** Gives the sound file with values set and removed at JSON pointers; what leads nowhere is left. */
export function spoil({ set = {}, remove = [] }: Change): unknown {
  const file: unknown = JSON.parse(soundText);
  for (const [pointer, value] of Object.entries(set)) {
    const { holder, key } = holderOf(file, pointer);
    // Plain assignment to __proto__ would change the prototype, which JSON cannot.
    if (holder) Object.defineProperty(holder, key, { value, ...likeJson });
  }
  for (const pointer of remove) {
    const { holder, key } = holderOf(file, pointer);
    if (Array.isArray(holder)) holder.splice(Number(key), 1);
    else if (holder) delete holder[key];
  }
  return file;
}

/**
 * The lines that a spoilt file is answered with, as the command line prints them; '' for a sound one. JSON cannot write
 * Infinity, but it can read 1e999; so the parsed file is what is checked.
 */
export function linesOf(change: Change): string {
  const checked = checkStudy(spoil(change));
  return 'problems' in checked ? listProblems(checked.problems).join('\n') : '';
}

const likeJson = { enumerable: true, configurable: true, writable: true };

/** Finds what holds a JSON pointer's last key; nothing where the way is blocked. */
export function holderOf(
  file: unknown,
  pointer: string,
): { holder: Record<string, unknown> | undefined; key: string } {
  const keys = pointer.split('/').slice(1);
  const key = keys.pop()!;
  let holder: unknown = file;
  for (const next of keys) {
    holder = isHolder(holder) && Object.hasOwn(holder, next) ? holder[next] : undefined;
  }
  return { holder: isHolder(holder) ? holder : undefined, key };
}

function isHolder(value: unknown): value is Record<string, unknown> {
  return typeof value === 'object' && value !== null;
}

/** Pointers of everything in a value, outer places before inner ones. */
export function listPointers(value: unknown, pointer = ''): string[] {
  if (!isHolder(value)) return [];
  return Object.entries(value).flatMap(([key, inner]) => {
    const here = `${pointer}/${key}`;
    return [here, ...listPointers(inner, here)];
  });
}
