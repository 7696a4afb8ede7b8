import { findApplicationById } from '../../db/repositories/applications.ts';
import { getBlob } from '../../db/repositories/blobs.ts';
import { getRuleSetVersion } from '../../db/repositories/rule-sets.ts';
import { findRun } from '../../db/repositories/runs.ts';
import { formatInstant } from '../../shared/format.ts';
import type { Sheet } from '../../shared/schemas/sheets.ts';
import type { Deps } from '../context.ts';
import { conflict, notFound } from '../errors.ts';
import type { Basis } from './bases.ts';
import { getUtilitySettings, writeReference } from './utility-settings.ts';

/* The working sheet of a run, computed from the very bytes that the run was: nothing of it is stored. */

/** Sheets are read several times in a row (page, paper, page again), so the last few are kept. */
const mostKept = 6;
const kept = new Map<string, Sheet>();

const movedOn =
  'The engine has changed since this run: computed now, its result has another hash, and numbers here may differ from those of the run.';

/** Who may read it was asked before (access.ts). */
export async function getSheet(deps: Deps, runId: string): Promise<Sheet> {
  const run = await findRun(deps.db, runId);
  if (run === undefined) throw notFound('The run');
  if (run.studySha256 === null || run.resultSha256 === null) throw notFound('The working sheet');
  const key = `${runId} ${run.resultSha256.toString('hex')}`;
  const known = kept.get(key);
  if (known) return known;
  const application = await findApplicationById(deps.db, run.applicationId);
  const utility = await getUtilitySettings(deps.db);
  const { content } = await getRuleSetVersion(deps.db, (JSON.parse(run.basis) as Basis).ruleSetVersionId);
  const resultSha256 = run.resultSha256.toString('hex');
  const answer = await deps.compute.ask('sheet', {
    studyBytes: await getBlob(deps.db, run.studySha256),
    ruleSet: content,
    origin: {
      utility: utility.name,
      reference: writeReference(utility, application?.number ?? null),
      run: run.publicId,
      studySha256: run.studySha256.toString('hex'),
      resultSha256,
      ...(run.finishedAt && { computedAt: formatInstant(run.finishedAt.toISOString(), utility.timeZone) }),
    },
  });
  if (answer.kind === 'refused') {
    // What this engine cannot read any more, an older one could: the run stands, its sheet cannot be made.
    const [problem] = answer.problems;
    throw conflict('study-refused', `The study of this run cannot be computed any more: ${problem}`);
  }
  const hasMoved = answer.resultSha256 !== resultSha256;
  const sheet = hasMoved ? { ...answer.sheet, warnings: [movedOn, ...answer.sheet.warnings] } : answer.sheet;
  kept.set(key, sheet);
  if (kept.size > mostKept) kept.delete(kept.keys().next().value!);
  return sheet;
}

/** The sheet on paper; its file carries the time at which the run ended, so that the same run gives the same bytes. */
export async function printSheet(
  deps: Deps,
  runId: string,
  paper: 'a4' | 'letter',
): Promise<{ name: string; bytes: Uint8Array }> {
  const sheet = await getSheet(deps, runId);
  const run = await findRun(deps.db, runId);
  const madeAt = run?.finishedAt ?? new Date(0);
  const bytes = await deps.compute.ask('sheet-pdf', { sheet, paper, madeAt });
  const name = `working-sheet-${sheet.origin.reference ?? runId}.pdf`.replace(/[^\w.-]+/g, '-');
  return { name, bytes };
}
