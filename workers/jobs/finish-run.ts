import { inTransaction, type Transaction } from '../../db/connection.ts';
import {
  lockApplicationById,
  updateApplication,
  type Application,
} from '../../db/repositories/applications.ts';
import { insertBlob } from '../../db/repositories/blobs.ts';
import { findNewestDecision } from '../../db/repositories/decisions.ts';
import {
  failTurn,
  finishTurn,
  insertFindings,
  lockTurn,
  type RunTurn,
} from '../../db/repositories/run-turns.ts';
import { findMailSubject, queueMail } from '../../server/services/outbox.ts';
import type { StudyBasis } from '../../server/services/studies.ts';
import { closedStages } from '../../shared/rules/application-life.ts';
import type { Finding, Verdict } from '../../shared/schemas/findings.ts';
import type { RunStep, RunSummary } from '../../shared/schemas/runs.ts';
import { publishRun, TurnLost, type Progress } from './progress.ts';
import type { ScreenDeps } from './screen-deps.ts';

export type Outcome = { findings: Finding[]; warnings: string[]; summary: RunSummary | null } & (
  | { kind: 'computed'; studyBytes: Uint8Array; resultBytes: Uint8Array }
  | { kind: 'reused'; studySha256: Buffer; resultSha256: Buffer }
);

async function keepBytes(trx: Transaction, outcome: Outcome) {
  if (outcome.kind === 'reused') return outcome;
  return {
    studySha256: await insertBlob(trx, Buffer.from(outcome.studyBytes)),
    resultSha256: await insertBlob(trx, Buffer.from(outcome.resultBytes)),
  };
}

/** The application's row first, then the run's: the order of all who need both. */
async function lockBoth(trx: Transaction, turn: RunTurn): Promise<Application> {
  const application = await lockApplicationById(trx, turn.applicationId);
  if (application === undefined || !(await lockTurn(trx, turn))) throw new TurnLost(turn);
  return application;
}

/** An earlier run that ends late does not take the place of a later one. */
async function showOnApplication(
  trx: Transaction,
  application: Application,
  turn: RunTurn,
  findings: Finding[],
  now: Date,
): Promise<void> {
  if (application.runId !== null && application.runId > turn.runId) return;
  const count = (verdict: Verdict) => findings.filter((finding) => finding.verdict === verdict).length;
  // `version` stays: nobody's open form is spoilt by a run that ends.
  await updateApplication(trx, application.id, {
    runId: turn.runId,
    outsideCount: count('outside'),
    needsDataCount: count('needs-data'),
    updatedAt: now,
  });
}

/**
 * Tells the applicant of the first preliminary and the first official run of what was handed in. What is screened again
 * later is the utility's own work, and after a decision there is nothing left to wait for.
 */
async function queueScreeningMail(
  trx: Transaction,
  application: Application,
  turn: RunTurn,
  now: Date,
): Promise<void> {
  const { ownRevisionId } = JSON.parse(turn.basis) as StudyBasis;
  if (closedStages.includes(application.stage) || ownRevisionId !== application.revisionId) return;
  if ((await findNewestDecision(trx, application.id)) !== undefined) return;
  const subject = await findMailSubject(trx, application.id);
  if (subject === undefined) return;
  const { recipient, ...rest } = subject;
  await queueMail(
    trx,
    { now },
    {
      kind: 'screening-done',
      dedupeKey: `screening-done:${application.publicId}:${ownRevisionId}:${turn.kind}`,
      applicationId: application.id,
      recipient,
      payload: { ...rest, runKind: turn.kind },
    },
  );
}

async function publishBoth(
  deps: ScreenDeps,
  turn: RunTurn,
  runVersion: number,
  version: number,
): Promise<void> {
  await publishRun(deps, turn, runVersion);
  const id = turn.applicationPublicId;
  await deps.events.publish({ kind: 'application', id, applicationId: id, version });
}

/** Everything that a result changes, in one transaction that a worker without its turn cannot make. */
export async function finishRun(
  deps: ScreenDeps,
  turn: RunTurn,
  progress: Progress,
  outcome: Outcome,
): Promise<void> {
  const now = deps.now();
  const finished: RunStep = { key: 'finished', label: 'Finished', percent: 100, at: now.toISOString() };
  const { version } = await inTransaction(deps.db, async (trx) => {
    const application = await lockBoth(trx, turn);
    const hashes = await keepBytes(trx, outcome);
    await insertFindings(trx, turn.runId, outcome.findings);
    await finishTurn(trx, turn, {
      studySha256: hashes.studySha256,
      resultSha256: hashes.resultSha256,
      summary: outcome.summary,
      warnings: outcome.warnings,
      steps: [...progress.steps, finished],
      now,
    });
    await showOnApplication(trx, application, turn, outcome.findings, now);
    await queueScreeningMail(trx, application, turn, now);
    return application;
  });
  await publishBoth(deps, turn, progress.version + 1, version);
}

/** For good. `detail` names elements and causes, and is for staff. */
export async function failRun(
  deps: ScreenDeps,
  turn: RunTurn,
  runVersion: number,
  words: { error: string; detail: string },
): Promise<void> {
  const now = deps.now();
  const { version } = await inTransaction(deps.db, async (trx) => {
    const application = await lockBoth(trx, turn);
    await failTurn(trx, turn, { ...words, now });
    return application;
  });
  await publishBoth(deps, turn, runVersion + 1, version);
}
