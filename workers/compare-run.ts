import { createHash } from 'node:crypto';
import type { Database } from '../db/connection.ts';
import { getBlob } from '../db/repositories/blobs.ts';
import { findStoredRun, getRuleSetPart } from '../db/repositories/study-parts.ts';
import type { StudyBasis } from '../server/services/studies.ts';
import { resultsVersion } from '../shared/results-version.ts';
import { computeStudy } from './compute-study.ts';

function hex(bytes: Uint8Array): string {
  return Buffer.from(bytes).toString('hex');
}

/**
 * Computes a stored run again from its own study file and compares the hashes of the results. Says what it finds and
 * gives the exit code: 0 equal, 1 different, 2 nothing to compare.
 */
export async function compareRun(
  db: Database,
  publicId: string,
  say: (line: string) => void,
): Promise<number> {
  const run = await findStoredRun(db, publicId);
  if (run === undefined) {
    say(`There is no run ${publicId}.`);
    return 2;
  }
  if (run.studySha256 === null || run.resultSha256 === null) {
    say(`Run ${publicId} is ${run.state}: only a finished run can be computed again.`);
    return 2;
  }
  const study = await getBlob(db, run.studySha256);
  const ruleSet = await getRuleSetPart(db, (JSON.parse(run.basis) as StudyBasis).ruleSetVersionId);
  const answer = computeStudy(study, ruleSet);
  if (answer.kind === 'refused') {
    say(`The stored study is no longer accepted:\n${answer.problems.join('\n')}`);
    return 1;
  }
  const again = createHash('sha256').update(answer.resultBytes).digest();
  const equal = again.equals(run.resultSha256);
  say(`study          ${hex(run.studySha256)}  as stored`);
  say(`result, stored ${hex(run.resultSha256)}  results version ${run.resultsVersion}`);
  say(`result, again  ${hex(again)}  results version ${resultsVersion}`);
  say(equal ? 'The results are the same.' : 'The results DIFFER.');
  return equal ? 0 : 1;
}
