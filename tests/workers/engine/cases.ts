import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import type { Study } from '../../../shared/schemas/study.ts';
import { readStudy } from '../../../workers/engine/read-study.ts';

export const fixtures = join(import.meta.dirname, '..', '..', '..', 'fixtures');

export function readJson(...path: string[]): unknown {
  return JSON.parse(readFileSync(join(fixtures, ...path), 'utf8'));
}

/** Reads a case of fixtures/cases the way the command line does, so that an unsound one fails its test. */
export function readCase(name: string): Study {
  return checked(readFileSync(join(fixtures, 'cases', name, 'case.json'), 'utf8'));
}

/** Reads a study made by a test. */
export function checkedStudy(study: Study): Study {
  return checked(JSON.stringify(study));
}

function checked(text: string): Study {
  const read = readStudy(text);
  if ('problems' in read) throw new Error(JSON.stringify(read.problems, null, 1));
  return read.study;
}
