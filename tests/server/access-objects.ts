import { createHash } from 'node:crypto';
import { mkdir, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { inTransaction } from '../../db/connection.ts';
import { insertApplication } from '../../db/repositories/applications.ts';
import { saveDraft } from '../../db/repositories/drafts.ts';
import { insertPreApplicationReport } from '../../db/repositories/pre-application-reports.ts';
import type { Subject } from '../../server/access.ts';
import type { Actor, Deps } from '../../server/context.ts';
import { storeMessage } from '../../server/local/mailbox-store.ts';
import { newPublicId } from '../../server/services/public-ids.ts';
import { finishRun, handIn, makeFindings } from '../support/fixture-applications.ts';
import type { FixtureWorld } from '../support/fixture-world.ts';

export type Objects = Record<Subject, string>;

type Stage = 'incomplete' | 'draft';

async function writeDraft(deps: Deps, person: Actor, applicationId: number): Promise<void> {
  const at = new Date();
  await saveDraft(deps.db, { applicationId, answers: {}, version: 1, updatedBy: person.id, updatedAt: at });
}

/** Just begun: nothing was handed in or computed. */
async function beginApplication(deps: Deps, person: Actor): Promise<string> {
  const publicId = newPublicId();
  const organisationId = person.organisationId as number;
  const at = new Date();
  const id = await insertApplication(deps.db, { publicId, organisationId, createdBy: person.id, at });
  await writeDraft(deps, person, id);
  return publicId;
}

/** Handed in and screened; then put into `stage`, from where its applicant may write again. */
async function insertScreened(deps: Deps, world: FixtureWorld, person: Actor, stage: Stage) {
  const { db } = deps;
  const at = new Date();
  const { publicId, preliminaryRunId } = await handIn(db, world, at, person);
  await finishRun(db, preliminaryRunId, makeFindings(), at);
  await db('applications').where({ public_id: publicId }).update({ stage, waiting_on: 'applicant' });
  const ids = { application: 'application_id', run: 'public_id' };
  const run = (await db('runs').where({ id: preliminaryRunId }).first(ids)) as {
    application: number;
    run: string;
  };
  await writeDraft(deps, person, run.application);
  return { application: publicId, run: run.run };
}

/** A file of `person`; named by the application's revision unless it is only uploaded so far. */
async function insertFile(
  { db, config }: Deps,
  person: Actor,
  applicationPublicId?: string,
): Promise<string> {
  const file = newPublicId();
  await mkdir(config.filesDir, { recursive: true });
  await writeFile(join(config.filesDir, file), '%');
  const [fileId] = await db('files').insert({
    public_id: file,
    organisation_id: person.organisationId,
    sha256: createHash('sha256').update('%').digest(),
    path: file,
    size_bytes: 1,
    media_type: 'application/pdf',
    original_name: 'plan.pdf',
    uploaded_by: person.id,
    uploaded_at: new Date(),
  });
  if (applicationPublicId !== undefined) {
    const { revision } = (await db('applications')
      .where({ public_id: applicationPublicId })
      .first({ revision: 'revision_id' })) as { revision: number };
    await db('revision_files').insert({ revision_id: revision, file_id: fileId, purpose: 'site-plan' });
  }
  return file;
}

async function insertMessage({ config }: Deps, person: Actor, others: Actor[]): Promise<string> {
  const mail = [
    'From: Desk <desk@desk.example>',
    // The name must not open the message to whom it imitates.
    `To: "${others.map(({ email }) => email).join(', ')}" <${person.email}>`,
    'Subject: Received',
    'Content-Type: text/html; charset=utf-8',
    '',
    '<p>Received</p>',
  ];
  return storeMessage(config.mailboxDir, Buffer.from(mail.join('\r\n')), new Date());
}

/** A report of a place of which little is known. */
async function insertReport({ db }: Deps, world: FixtureWorld, person: Actor): Promise<string> {
  const publicId = newPublicId();
  const { ruleSetVersionId, model } = world;
  await inTransaction(db, (trx) =>
    insertPreApplicationReport(trx, {
      ...{
        publicId,
        organisationId: person.organisationId!,
        requestedBy: person.id,
        requestedAt: new Date(),
      },
      request: { lat: 0, lng: 0, phases: 'ABC' },
      ...{ modelVersionId: model.versionId, nodeId: 'n2', circuit: 'FX-1', ruleSetVersionId },
      aheadRevisionIds: [],
      figures: {
        ...{ kv: 12.47, highSideKv: null, phases: 'ABC', lineType: null, distanceKm: 1, isMainline: null },
        ...{ supply: 'radial', bankKva: null, circuitPeakKw: null, circuitMinimumKw: null },
        ...{ existingOnCircuitKw: 0, queuedOnCircuitKw: 0, existingOnBankKw: 0, queuedOnBankKw: 0 },
        ...{ availableOnBankKw: null, sections: [], devices: [], regulators: 0, capacitorsOnCircuit: 0 },
        ...{ hasTapChanger: null, limitingAmpacityA: null, threePhaseFaultA: null, lineGroundFaultA: null },
        ...{ nearRating: 0, stabilityLimited: null },
      },
    }),
  );
  return publicId;
}

/** One of each subject, whole enough that every route can work with it. */
export async function insertObjects(
  deps: Deps,
  world: FixtureWorld,
  person: Actor,
  stage: Stage,
): Promise<Objects> {
  const others = Object.values(world.people).filter(({ id }) => id !== person.id);
  const { application, run } = await insertScreened(deps, world, person, stage);
  return {
    // A draft that was screened cannot be; the run of one is there only to show that its stage closes it.
    application: stage === 'draft' ? await beginApplication(deps, person) : application,
    run,
    file: await insertFile(deps, person, stage === 'draft' ? undefined : application),
    message: await insertMessage(deps, person, others),
    report: await insertReport(deps, world, person),
  };
}
