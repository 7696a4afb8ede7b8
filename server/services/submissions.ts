import { inTransaction, type Database, type Transaction } from '../../db/connection.ts';
import {
  takeApplicationNumber,
  type Application,
  type ApplicationChanges,
} from '../../db/repositories/applications.ts';
import { insertBlob } from '../../db/repositories/blobs.ts';
import { deleteDraft } from '../../db/repositories/drafts.ts';
import { answerInformationRequests } from '../../db/repositories/information-requests.ts';
import { lockNetworkModel } from '../../db/repositories/network-models.ts';
import { getRevision, insertRevision, insertRevisionFiles } from '../../db/repositories/revisions.ts';
import { localDate } from '../../shared/rules/business-days.ts';
import { composeProject, type ElectricalProject } from '../../shared/rules/project-electrical.ts';
import {
  answerSections,
  sectionSchemas,
  type AnswerSection,
  type CompleteAnswers,
} from '../../shared/schemas/answers.ts';
import type { ApplicationView, Submission } from '../../shared/schemas/applications.ts';
import type { Deps, SignedInContext } from '../context.ts';
import { conflict, invalid } from '../errors.ts';
import { listProblems } from '../validate.ts';
import { announce } from './announcements.ts';
import { checkAnswers, toPoint, type CheckedAnswers } from './answer-checks.ts';
import { getApplicationView } from './applications.ts';
import { getDueDate } from './clocks.ts';
import { getOpenDraft, lockOpenDraft, refuseOutdated, type OpenDraft } from './draft-access.ts';
import { findMailSubject, queueMail } from './outbox.ts';
import { requestRun } from './run-requests.ts';
import type { SnappedNode } from './snapping.ts';
import { moveApplication } from './transitions.ts';
import { getUtilitySettings, writeReference, type UtilitySettings } from './utility-settings.ts';

/** Answers in which nothing is missing or wrong, with what they name. */
interface ReadyAnswers extends CheckedAnswers {
  answers: CompleteAnswers;
  snapped: SnappedNode;
}

/** The whole form at once: what is missing, what is wrong, in the order of its parts. */
async function checkForm(db: Database, open: OpenDraft): Promise<ReadyAnswers> {
  // Papers are the one part that may stay empty.
  const answers = { papers: { files: [] }, ...open.answers };
  const missing = answerSections.filter((section) => answers[section] === undefined);
  const checked = await checkAnswers(db, open.application.organisationId, answers);
  const problems = [
    ...checked.problems,
    ...missing.flatMap((section) => listProblems(sectionSchemas[section], {}, section)),
  ];
  const rank = ({ path }: { path: string }) => answerSections.indexOf(path.split('.')[0] as AnswerSection);
  if (problems.length > 0) throw invalid(problems.sort((one, other) => rank(one) - rank(other)));
  const { snapped } = checked;
  if (snapped === undefined) throw new Error('Checked answers: got no node, expected one or a problem');
  return { ...checked, answers: answers as CompleteAnswers, snapped };
}

function composeFrom(ready: ReadyAnswers, reference: string): ElectricalProject {
  const { answers, records, snapped } = ready;
  return composeProject(reference, { ...answers, records }, toPoint(snapped));
}

interface Attestation {
  context: SignedInContext;
  attestedBy: string;
}

/** Freezes what was handed in: answers, equipment, place, and the project as the study will have it. */
async function writeRevision(
  trx: Transaction,
  application: Application,
  ready: ReadyAnswers,
  { project }: ElectricalProject,
  { context, attestedBy }: Attestation,
): Promise<number> {
  const { answers, snapped, records, files } = ready;
  const revisionId = await insertRevision(trx, {
    applicationId: application.id,
    answers,
    projectSha256: await insertBlob(trx, Buffer.from(JSON.stringify(project), 'utf8')),
    equipmentVersionIds: [...records.values()].map(({ id }) => id),
    modelId: snapped.model.modelId,
    poiNode: snapped.node.nodeId,
    circuit: snapped.node.circuit,
    attestedBy,
    attestedUserId: context.actor.id,
    attestedAt: context.now,
  });
  const papers = answers.papers.files.flatMap(({ fileId, purpose }) => {
    const file = files.find(({ publicId }) => publicId === fileId);
    return file === undefined ? [] : [{ fileId: file.id, purpose }];
  });
  await insertRevisionFiles(trx, revisionId, papers);
  return revisionId;
}

async function confirmReceipt(
  trx: Transaction,
  context: SignedInContext,
  application: Application,
  receivedOn: string,
): Promise<void> {
  const subject = await findMailSubject(trx, application.id);
  if (subject === undefined) throw new Error(`Application row ${application.id} has no contact to write to`);
  const { recipient, ...said } = subject;
  const completenessDueOn = await getDueDate(trx, application.id, 'completeness');
  await queueMail(trx, context, {
    kind: 'submitted',
    dedupeKey: `submitted:${application.publicId}:${application.revisionId}`,
    applicationId: application.id,
    recipient,
    payload: { ...said, receivedOn, completenessDueOn },
  });
}

/** What was handed in and by whom it was attested, for the trail. */
async function describeRevision(trx: Transaction, revisionId: number) {
  const { number, projectSha256, attestedBy } = await getRevision(trx, revisionId);
  return { revisionNumber: number, projectSha256: projectSha256.toString('hex'), attestedBy };
}

/** The rows that a submission writes, under the locks that `receive` took. */
async function writeSubmission(
  trx: Transaction,
  utility: UtilitySettings,
  application: Application,
  ready: ReadyAnswers,
  attestation: Attestation,
) {
  const { context } = attestation;
  const isFirst = application.stage === 'draft';
  const number = application.number ?? (await takeApplicationNumber(trx));
  const electrical = composeFrom(ready, writeReference(utility, number));
  const today = localDate(context.now, utility.timeZone);
  const revisionId = await writeRevision(trx, application, ready, electrical, attestation);
  const changes: ApplicationChanges = {
    number,
    name: ready.answers.project.name,
    place: ready.answers.site.address ?? null,
    kind: electrical.kind,
    sizeKw: electrical.sizeKw,
    exportKw: electrical.exportKw,
    modelId: ready.snapped.model.modelId,
    circuit: ready.snapped.node.circuit,
    revisionId,
    receivedOn: application.receivedOn ?? today,
  };
  const event = isFirst ? 'submit' : 'resubmit';
  const about = await describeRevision(trx, revisionId);
  const moved = await moveApplication(trx, context, application, event, null, changes, about);
  await deleteDraft(trx, application.id);
  if (!isFirst) await answerInformationRequests(trx, application.id, context.now);
  const run = await requestRun(trx, context, moved, 'preliminary');
  await confirmReceipt(trx, context, moved, today);
  return { application: moved, run };
}

/** Hands in the draft, or what was sent back: one transaction, and a second press of the button finds it done. */
export async function submitApplication(
  deps: Deps,
  context: SignedInContext,
  publicId: string,
  body: Submission,
): Promise<ApplicationView> {
  const seen = await getOpenDraft(deps.db, context, publicId);
  const ready = await checkForm(deps.db, seen);
  const utility = await getUtilitySettings(deps.db);
  const written = await inTransaction(deps.db, async (trx) => {
    const { model } = ready.snapped;
    const locked = await lockNetworkModel(trx, model.modelId);
    const open = await lockOpenDraft(trx, context, publicId);
    await refuseOutdated(trx, open, body.version);
    if (open.draft?.version !== seen.draft?.version || locked.publishedVersionId !== model.versionId) {
      throw conflict(
        'changed-meanwhile',
        'The answers or the feeder changed in this very moment: submit again',
      );
    }
    const attestation = { context, attestedBy: body.attestedBy };
    return writeSubmission(trx, utility, open.application, ready, attestation);
  });
  await announce(deps, { applications: [written.application], runs: [written.run] });
  return getApplicationView(deps, context, publicId);
}
