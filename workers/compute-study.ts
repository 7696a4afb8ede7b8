import type { Finding } from '../shared/schemas/findings.ts';
import type { RuleSet } from '../shared/schemas/rule-sets.ts';
import type { RunSummary } from '../shared/schemas/runs.ts';
import { listNotFinite } from './engine/finite-result.ts';
import { readStudy } from './engine/read-study.ts';
import { runStudy, type StudyStep } from './engine/run-study.ts';
import type { Problem } from './engine/shape.ts';
import { summariseResult } from './summarise-result.ts';

interface ComputedStudy {
  kind: 'computed';
  /** Exactly what the command line prints for the same study and rule set. */
  resultBytes: Uint8Array;
  findings: Finding[];
  warnings: string[];
  summary: RunSummary | null;
}

/** A study that cannot be run, or gives no numbers: one line for each thing that is wrong with it. */
interface RefusedStudy {
  kind: 'refused';
  problems: string[];
}

export type StudyAnswer = ComputedStudy | RefusedStudy;

const mostProblems = 200;

function refuse(problems: readonly Problem[]): RefusedStudy {
  const lines = problems
    .slice(0, mostProblems)
    .map(({ pointer, got, expected }) => `${pointer}: got ${got}, expected ${expected}`);
  return { kind: 'refused', problems: lines };
}

/** From the bytes of a study file to the bytes of its result. */
export function computeStudy(
  studyBytes: Uint8Array,
  ruleSet: RuleSet,
  onStep?: (step: StudyStep) => void,
): StudyAnswer {
  const read = readStudy(new TextDecoder().decode(studyBytes));
  if ('problems' in read) return refuse(read.problems);
  const result = runStudy(read.study, ruleSet, onStep);
  const notFinite = listNotFinite(result);
  if (notFinite.length > 0) return refuse(notFinite);
  return {
    kind: 'computed',
    resultBytes: new TextEncoder().encode(`${JSON.stringify(result)}\n`),
    findings: result.findings,
    warnings: result.warnings,
    summary: summariseResult(read.study, result),
  };
}
