import type { StudyAnswer } from '../server/compute-messages.ts';
import type { RuleSet } from '../shared/schemas/rule-sets.ts';
import { listNotFinite } from './engine/finite-result.ts';
import { listProblems } from './engine/problems.ts';
import { readStudy } from './engine/read-study.ts';
import { runStudy, type StudyStep } from './engine/run-study.ts';
import { writeResult } from './engine/write-result.ts';
import { decodeText } from './study-text.ts';
import { summariseResult } from './summarise-result.ts';

/** From the bytes of a study file to the bytes of its result. */
export function computeStudy(
  studyBytes: Uint8Array,
  ruleSet: RuleSet,
  onStep?: (step: StudyStep) => void,
): StudyAnswer {
  const decoded = decodeText(studyBytes);
  if ('problems' in decoded) return { kind: 'refused', problems: listProblems(decoded.problems) };
  const read = readStudy(decoded.text);
  if ('problems' in read) return { kind: 'refused', problems: listProblems(read.problems) };
  const result = runStudy(read.study, ruleSet, onStep);
  const notFinite = listNotFinite(result);
  if (notFinite.length > 0) return { kind: 'refused', problems: listProblems(notFinite) };
  return {
    kind: 'computed',
    resultBytes: Buffer.concat(Array.from(writeResult(result), (chunk) => Buffer.from(chunk))),
    findings: result.findings,
    warnings: result.warnings,
    summary: summariseResult(read.study, result),
  };
}
