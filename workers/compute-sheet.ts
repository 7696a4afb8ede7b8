import { createHash } from 'node:crypto';
import type { Answer, Question } from '../server/compute-messages.ts';
import { listProblems } from './engine/problems.ts';
import { readStudy } from './engine/read-study.ts';
import { workStudy } from './engine/run-study.ts';
import { makeSheet } from './engine/sheet/make-sheet.ts';
import { writeResult } from './engine/write-result.ts';
import { decodeText } from './study-text.ts';

/** From the bytes of a study file to its working sheet. */
export function computeSheet({ studyBytes, ruleSet, origin }: Question<'sheet'>): Answer<'sheet'> {
  const decoded = decodeText(studyBytes);
  if ('problems' in decoded) return { kind: 'refused', problems: listProblems(decoded.problems) };
  const read = readStudy(decoded.text);
  if ('problems' in read) return { kind: 'refused', problems: listProblems(read.problems) };
  const { result, worked } = workStudy(read.study, ruleSet);
  if (!worked)
    return { kind: 'refused', problems: ['/project: got none, expected the project of the sheet'] };
  const hash = createHash('sha256');
  for (const chunk of writeResult(result)) hash.update(chunk);
  return { kind: 'sheet', sheet: makeSheet(result, worked, origin), resultSha256: hash.digest('hex') };
}
