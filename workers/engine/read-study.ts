import type { Study } from '../../shared/schemas/study.ts';
import { checkNetwork } from './check-network.ts';
import { checkReferences } from './check-references.ts';
import { checkConstructions } from './line-check.ts';
import { Problems, escapeText } from './problems.ts';
import { wholeFile } from './shape.ts';
import { checkStudyShape } from './study-shape.ts';

/* From the text of a study file to a study that can be run, or to what is wrong with it. */

/** Parses the text as JSON; a byte order mark in front is dropped. */
export function parseJson(text: string): { value: unknown } | { problems: Problems } {
  try {
    return { value: JSON.parse(text.startsWith('\uFEFF') ? text.slice(1) : text) };
  } catch (error) {
    const problems = new Problems();
    const got = error instanceof Error ? escapeText(error.message) : 'something unreadable';
    problems.push({ pointer: '/', got, expected: 'a file in JSON' });
    return { problems };
  }
}

/** Checks a parsed file, in time linear in its size: first its shape, then its references, then the network it makes. */
export function checkStudy(value: unknown): { study: Study } | { problems: Problems } {
  const problems = new Problems();
  if (!checkStudyShape.accepts(value)) checkStudyShape(value, wholeFile, problems);
  if (problems.length > 0) return { problems };
  const study = value as Study;
  const joined = checkReferences(study, problems);
  checkConstructions(study, problems);
  if (problems.length > 0) return { problems };
  checkNetwork(joined, study.feeder.scenarios ?? [], problems);
  return problems.length > 0 ? { problems } : { study };
}

/** Reads a study file; no input makes it throw. */
export function readStudy(text: string): { study: Study } | { problems: Problems } {
  const parsed = parseJson(text);
  return 'problems' in parsed ? parsed : checkStudy(parsed.value);
}
