import type { PreApplicationFigures } from '../shared/schemas/pre-application-reports.ts';
import type { RuleSet } from '../shared/schemas/rule-sets.ts';
import { reportPreApplication } from './engine/pre-application.ts';
import { listProblems } from './engine/problems.ts';
import { readStudy } from './engine/read-study.ts';
import { decodeText } from './study-text.ts';

/** Share of a rating beyond which a device counts as near it, where the rules ask nothing about duty (0.875: SGIP 2.2.1.5). */
const usualDutyShare = 0.875;

/** From the bytes of a model's study to what is known of one of its nodes. */
export function computePreApplication(
  studyBytes: Uint8Array,
  ruleSet: RuleSet,
  node: string,
): PreApplicationFigures {
  const decoded = decodeText(studyBytes);
  const read = 'problems' in decoded ? decoded : readStudy(decoded.text);
  if ('problems' in read) throw new Error(`A published model: ${listProblems(read.problems).join('; ')}`);
  const limit = ruleSet.rules['interrupting-duty']?.limits[0].limit;
  return reportPreApplication(read.study, node, ruleSet, limit == null ? usualDutyShare : limit / 100);
}
