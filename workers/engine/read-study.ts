import type { Study } from '../../shared/schemas/study.ts';
import { checkNetwork } from './check-network.ts';
import { checkReferences } from './check-references.ts';
import type { Problem } from './shape.ts';
import { wholeFile } from './shape.ts';
import { checkStudyShape } from './study-shape.ts';

/* From the text of a study file to a study that can be run, or to a list of everything that is wrong with it. */

/** Parses the text as JSON; a byte order mark in front is dropped. */
export function parseJson(text: string): { value: unknown } | { problems: Problem[] } {
  try {
    return { value: JSON.parse(text.startsWith('\uFEFF') ? text.slice(1) : text) };
  } catch (error) {
    const got = error instanceof Error ? error.message.replace(/\s+/g, ' ') : 'something unreadable';
    return { problems: [{ pointer: '/', got, expected: 'a file in JSON' }] };
  }
}

/** Checks a parsed file, in time linear in its size: first its shape, then its references, then the network it makes. */
export function checkStudy(value: unknown): { study: Study } | { problems: Problem[] } {
  const problems: Problem[] = [];
  checkStudyShape(value, wholeFile, problems);
  if (problems.length > 0) return { problems };
  const study = value as Study;
  checkReferences(study, problems);
  if (problems.length > 0) return { problems };
  checkNetwork(study, problems);
  return problems.length > 0 ? { problems } : { study };
}

/** Reads a study file; no input makes it throw. */
export function readStudy(text: string): { study: Study } | { problems: Problem[] } {
  const parsed = parseJson(text);
  return 'problems' in parsed ? parsed : checkStudy(parsed.value);
}
