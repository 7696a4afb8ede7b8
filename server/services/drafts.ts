import { inTransaction } from '../../db/connection.ts';
import {
  countDrafts,
  deleteDraftApplication,
  insertApplication,
  updateApplication,
  type ApplicationChanges,
} from '../../db/repositories/applications.ts';
import { saveDraft } from '../../db/repositories/drafts.ts';
import { listInformationRequests } from '../../db/repositories/information-requests.ts';
import { lockOrganisation } from '../../db/repositories/organisations.ts';
import { insertStageEvent } from '../../db/repositories/stage-events.ts';
import {
  answerSections,
  sectionSchemas,
  type Answers,
  type AnswerSection,
} from '../../shared/schemas/answers.ts';
import type { DraftView, InformationRequestView, SaveSection } from '../../shared/schemas/applications.ts';
import type { FieldProblem } from '../../shared/schemas/problems.ts';
import type { Deps, SignedInContext } from '../context.ts';
import { conflict, invalid, notAllowed, notFound, refused } from '../errors.ts';
import { validate } from '../validate.ts';
import { checkAnswers, pickProblems, type CheckedAnswers } from './answer-checks.ts';
import { getOpenDraft, lockOpenDraft, refuseOutdated, type OpenDraft } from './draft-access.ts';
import { toFileView } from './files.ts';
import { newPublicId } from './public-ids.ts';
import { getUtilitySettings, writeReference } from './utility-settings.ts';

function describeSection(section: AnswerSection, answers: Answers, problems: FieldProblem[]) {
  if (answers[section] === undefined) return { section, state: 'not-started' as const };
  const isRight = pickProblems(problems, section).length === 0;
  return { section, state: isRight ? ('completed' as const) : ('in-progress' as const) };
}

function listPapers(answers: Answers, { files }: CheckedAnswers): DraftView['papers'] {
  return (answers.papers?.files ?? []).flatMap(({ fileId, purpose }) => {
    const file = files.find(({ publicId }) => publicId === fileId);
    return file === undefined ? [] : [{ ...toFileView(file), purpose }];
  });
}

async function findOpenRequest(
  deps: Deps,
  { application }: OpenDraft,
): Promise<InformationRequestView | null> {
  if (application.stage !== 'incomplete') return null;
  const requests = await listInformationRequests(deps.db, application.id);
  const open = requests.find(({ answeredAt }) => answeredAt === null);
  if (open === undefined) return null;
  return { items: open.items, askedBy: 'the utility', askedAt: open.askedAt.toISOString(), answeredAt: null };
}

export async function getDraft(deps: Deps, context: SignedInContext, publicId: string): Promise<DraftView> {
  const open = await getOpenDraft(deps.db, context, publicId);
  const { application, draft, answers } = open;
  const checked = await checkAnswers(deps.db, application.organisationId, answers);
  return {
    applicationId: application.publicId,
    reference: writeReference(await getUtilitySettings(deps.db), application.number),
    version: application.version,
    answers,
    papers: listPapers(answers, checked),
    sections: answerSections.map((section) => describeSection(section, answers, checked.problems)),
    request: await findOpenRequest(deps, open),
    updatedAt: (draft?.updatedAt ?? application.updatedAt).toISOString(),
  };
}

/** Of one organisation at a time; a large installer has a few dozen under way (common practice, no source). */
const mostDrafts = 100;

/** Begins an application of the actor's organisation. */
export async function startApplication(deps: Deps, context: SignedInContext): Promise<DraftView> {
  const { organisationId, id: createdBy } = context.actor;
  if (organisationId === null) throw notAllowed();
  const publicId = newPublicId();
  await inTransaction(deps.db, async (trx) => {
    await lockOrganisation(trx, organisationId);
    if ((await countDrafts(trx, organisationId)) >= mostDrafts) {
      const words = `Your organisation has ${mostDrafts} drafts open: submit or discard one before you start another`;
      throw refused('too-many-drafts', words);
    }
    const id = await insertApplication(trx, { publicId, organisationId, createdBy, at: context.now });
    await insertStageEvent(trx, {
      applicationId: id,
      event: 'start',
      fromStage: null,
      toStage: 'draft',
      actorId: createdBy,
      note: null,
      at: context.now,
    });
  });
  return getDraft(deps, context, publicId);
}

function readSection(section: string): AnswerSection {
  const known = answerSections.find((candidate) => candidate === section);
  if (known === undefined) throw notFound('That part of the form');
  return known;
}

/** What lists show of a draft. Of one that was sent back they show what was handed in until it is handed in again. */
function listRowChanges({ application }: OpenDraft, answers: Answers): ApplicationChanges {
  if (application.stage !== 'draft') return {};
  return { name: answers.project?.name ?? '', place: answers.site?.address ?? null };
}

export async function saveSection(
  deps: Deps,
  context: SignedInContext,
  publicId: string,
  sectionName: string,
  body: SaveSection,
): Promise<DraftView> {
  const section = readSection(sectionName);
  const before = await getOpenDraft(deps.db, context, publicId);
  const saved = { [section]: validate(sectionSchemas[section], body.answers) };
  const { organisationId } = before.application;
  const { problems } = await checkAnswers(deps.db, organisationId, { ...before.answers, ...saved });
  const own = pickProblems(problems, section);
  if (own.length > 0) throw invalid(own);
  await inTransaction(deps.db, async (trx) => {
    const open = await lockOpenDraft(trx, context, publicId);
    await refuseOutdated(trx, open, body.version);
    const { application } = open;
    const answers = { ...open.answers, ...saved };
    const version = application.version + 1;
    const written = { updatedBy: context.actor.id, updatedAt: context.now };
    await saveDraft(trx, { applicationId: application.id, answers, version, ...written });
    const changes = listRowChanges(open, answers);
    await updateApplication(trx, application.id, { ...changes, version, updatedAt: context.now });
  });
  return getDraft(deps, context, publicId);
}

/** Throws away what nobody has received; its files go with the sweep. */
export async function discardDraft(deps: Deps, context: SignedInContext, publicId: string): Promise<void> {
  await inTransaction(deps.db, async (trx) => {
    const { application } = await lockOpenDraft(trx, context, publicId);
    if (application.stage !== 'draft') {
      throw conflict('wrong-stage', 'This application was handed in; withdraw it instead');
    }
    await deleteDraftApplication(trx, application.id);
  });
}
