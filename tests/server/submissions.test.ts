import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { getBlob } from '../../db/repositories/blobs.ts';
import { composeStudy } from '../../server/services/studies.ts';
import type { Basis } from '../../server/services/bases.ts';
import { proFormaRuleSet } from '../../shared/rules/pro-forma.ts';
import type { ApplicationView, DraftView } from '../../shared/schemas/applications.ts';
import type { Answers } from '../../shared/schemas/answers.ts';
import type { Project, Study } from '../../shared/schemas/study.ts';
import { runStudy } from '../../workers/engine/run-study.ts';
import { checkStudy } from '../../workers/engine/read-study.ts';
import { biogasAnswers, rooftopAnswers, solarAnswers } from '../support/fixture-answers.ts';
import { fillDraft, handIn, pressSubmit, saveSection } from '../support/fixture-handing-in.ts';
import { makeFixtureWorld, type FixtureWorld } from '../support/fixture-world.ts';
import { makeTestApp, readProblem, signInAs, type Browser, type TestApp } from '../support/test-app.ts';

let desk: TestApp;
let world: FixtureWorld;
let applicant: Browser;
let reviewer: Browser;

beforeAll(async () => {
  desk = await makeTestApp();
  world = await makeFixtureWorld(desk.deps.db);
  applicant = await signInAs(desk.app, world.people.applicant);
  reviewer = await signInAs(desk.app, world.people.reviewer);
});
afterAll(() => desk.stop());

interface RevisionRow {
  number: number;
  answers: string;
  project_sha256: Buffer;
  equipment_version_ids: string;
  poi_node: string;
  circuit: string;
}

async function listRevisions(publicId: string): Promise<RevisionRow[]> {
  return desk.deps
    .db('application_revisions as revision')
    .join('applications as application', 'application.id', 'revision.application_id')
    .where('application.public_id', publicId)
    .orderBy('revision.number')
    .select<RevisionRow[]>('revision.*');
}

async function readProject(revision: RevisionRow | undefined): Promise<Project> {
  const bytes = await getBlob(desk.deps.db, revision?.project_sha256 ?? Buffer.alloc(32));
  return JSON.parse(bytes.toString()) as Project;
}

/** The study of the application's newest run, as the worker makes it from the frozen basis. */
async function composeNewestStudy(publicId: string): Promise<Study> {
  const [run] = await desk.deps
    .db('runs')
    .join('applications as application', 'application.id', 'runs.application_id')
    .where('application.public_id', publicId)
    .orderBy('runs.id', 'desc')
    .select<{ basis: string }[]>('runs.basis');
  const { bytes } = await composeStudy(desk.deps.db, JSON.parse(run?.basis ?? '') as Basis);
  return JSON.parse(bytes.toString()) as Study;
}

async function readMail(publicId: string) {
  return desk.deps
    .db('outbox')
    .join('applications as application', 'application.id', 'outbox.application_id')
    .where('application.public_id', publicId)
    .orderBy('outbox.id')
    .select<{ kind: string; recipient: string; payload: string }[]>('outbox.*');
}

async function press(draft: DraftView): Promise<ApplicationView> {
  const answer = await pressSubmit(applicant, draft);
  if (answer.status !== 200) throw new Error(answer.text);
  return answer.body as ApplicationView;
}

describe('a submission', () => {
  it('of a solar project gets its number, its clock, a preliminary run and a mail, and is frozen', async () => {
    desk.enqueued.length = 0;
    desk.published.length = 0;
    const view = await handIn(applicant, solarAnswers());
    expect(view).toMatchObject({
      name: 'Saltwick barn roofs',
      stage: 'submitted',
      waitingOn: 'utility',
      kind: 'pv-inverter',
      sizeKw: 1000,
      circuit: 'FX-1',
      revisionNumber: 1,
      attestedBy: 'Ada Brenn',
      answers: solarAnswers(),
      run: { kind: 'preliminary', state: 'queued' },
      clock: { kind: 'completeness', state: 'running', usedDays: 0 },
      queuePosition: null,
      poi: null,
    });
    expect(view.reference).toMatch(/^FX-1\d{3}$/);
    expect(view.events.map(({ event }) => event)).toEqual(['start', 'submit']);
    expect(desk.enqueued).toHaveLength(1);
    const told = desk.published.map(({ kind, applicationId }) => ({ kind, applicationId }));
    expect(told).toEqual(
      expect.arrayContaining([
        { kind: 'application', applicationId: view.publicId },
        { kind: 'run', applicationId: view.publicId },
      ]),
    );
    const [mail] = await readMail(view.publicId);
    expect(mail).toMatchObject({ kind: 'submitted', recipient: 'ada@saltwick.example' });
    expect(JSON.parse(mail?.payload ?? '')).toMatchObject({
      reference: view.reference,
      receivedOn: view.receivedOn,
      completenessDueOn: view.clock?.dueOn,
    });
    const [revision] = await listRevisions(view.publicId);
    expect(revision).toMatchObject({ number: 1, poi_node: 'n2', circuit: 'FX-1' });
    expect(JSON.parse(revision?.equipment_version_ids ?? '')).toHaveLength(2);
    expect(await readProject(revision)).toMatchObject({ id: view.reference, node: 'n2' });
  });

  it('of each kind of project makes a study that the engine computes', async () => {
    for (const answers of [solarAnswers(), biogasAnswers(), rooftopAnswers()]) {
      const { publicId } = await handIn(applicant, answers);
      const study = await composeNewestStudy(publicId);
      expect(study.project?.node).toBe(answers.connection.phases === 'one' ? 'n4' : 'n2');
      expect(checkStudy(study)).not.toHaveProperty('problems');
      const result = runStudy(study, proFormaRuleSet);
      expect(result.project?.node).toBe(study.project?.node);
      expect(result.findings.length).toBeGreaterThan(0);
    }
  });

  it('of two people at once gives two numbers, one after the other', async () => {
    const drafts = [await fillDraft(applicant, solarAnswers()), await fillDraft(applicant, biogasAnswers())];
    const views = await Promise.all(drafts.map(press));
    const numbers = views.map(({ reference }) => Number(reference.slice(3))).sort();
    expect((numbers[1] ?? 0) - (numbers[0] ?? 0)).toBe(1);
  });

  it('pressed twice at once happens once', async () => {
    const draft = await fillDraft(applicant, solarAnswers());
    const answers = await Promise.all([pressSubmit(applicant, draft), pressSubmit(applicant, draft)]);
    expect(answers.map(({ status }) => status).sort()).toEqual([200, 409]);
    expect(await listRevisions(draft.applicationId)).toHaveLength(1);
    expect(await readMail(draft.applicationId)).toHaveLength(1);
  });

  it('of a form with gaps says what each missing part asks for, by section and field, in the form’s order', async () => {
    const { site, connection } = solarAnswers();
    const draft = await fillDraft(applicant, { connection, site });
    const problem = readProblem(await pressSubmit(applicant, draft));
    expect(problem).toMatchObject({ status: 400, code: 'invalid' });
    expect(problem.errors).toEqual([
      { path: 'project.name', message: 'Enter a name for the project, in 120 characters or fewer' },
      {
        path: 'project.contactName',
        message: 'Enter the name of the person we should write to, in 120 characters or fewer',
      },
      { path: 'project.contactEmail', message: 'Enter an e-mail address in the form name@example.org' },
      { path: 'equipment.units', message: 'Add at least one generating unit' },
    ]);
  });

  it('of parts that no longer fit each other is refused at their fields', async () => {
    const draft = await fillDraft(applicant, solarAnswers());
    const changed = await saveSection(applicant, draft, 'equipment', biogasAnswers().equipment);
    const { errors } = readProblem(await pressSubmit(applicant, changed));
    expect(errors.map(({ path }) => path)).toEqual([
      'connection.machineNeutral',
      'connection.transformer.rating.equipmentId',
      'connection.transformer.rating.equipmentId',
    ]);
  });

  it('without the name of who attests, or without agreeing, is refused', async () => {
    const draft = await fillDraft(applicant, solarAnswers());
    const path = `/api/applications/${draft.applicationId}/submission`;
    const answer = await applicant.send('post', path, { version: draft.version, agrees: false });
    expect(readProblem(answer).errors).toEqual([
      { path: 'attestedBy', message: 'Enter your full name' },
      { path: 'agrees', message: 'Confirm that the answers are true and complete' },
    ]);
  });

  it('of answers that a colleague changed meanwhile is refused', async () => {
    const draft = await fillDraft(applicant, solarAnswers());
    const colleague = await signInAs(desk.app, world.people.colleague);
    await saveSection(colleague, draft, 'project', { ...solarAnswers().project, name: 'Other' });
    expect(readProblem(await pressSubmit(applicant, draft))).toMatchObject({
      status: 409,
      code: 'version-conflict',
    });
  });
});

describe('an application that was sent back', () => {
  async function sendBack(answers: Answers): Promise<ApplicationView> {
    const { publicId, version } = await handIn(applicant, answers);
    const items = [{ section: 'papers', text: 'The one-line diagram is missing.' }];
    const answer = await reviewer.send('post', `/api/applications/${publicId}/deficiency`, {
      version,
      items,
    });
    if (answer.status !== 200) throw new Error(answer.text);
    return answer.body as ApplicationView;
  }

  async function openDraft(publicId: string): Promise<DraftView> {
    return (await applicant.get(`/api/applications/${publicId}/draft`).expect(200)).body as DraftView;
  }

  it('opens with what was handed in and with what is asked for', async () => {
    const sent = await sendBack(solarAnswers());
    const draft = await openDraft(sent.publicId);
    expect(draft.answers).toEqual(solarAnswers());
    expect(draft.request).toMatchObject({
      items: [{ section: 'papers', text: 'The one-line diagram is missing.' }],
      askedBy: 'the utility',
      answeredAt: null,
    });
  });

  it('becomes a second revision under the same number when it is handed in again', async () => {
    const sent = await sendBack(solarAnswers());
    const draft = await openDraft(sent.publicId);
    const project = { ...solarAnswers().project, name: 'Saltwick barns and byre' };
    const changed = await saveSection(applicant, draft, 'project', project);
    const seen = (await reviewer.get(`/api/applications/${sent.publicId}`).expect(200))
      .body as ApplicationView;
    expect(seen.name).toBe('Saltwick barn roofs');
    const view = await press(changed);
    expect(view).toMatchObject({
      reference: sent.reference,
      name: 'Saltwick barns and byre',
      stage: 'submitted',
      revisionNumber: 2,
      receivedOn: sent.receivedOn,
      clock: { kind: 'completeness', state: 'running' },
    });
    expect(view.requests[0]?.answeredAt).not.toBeNull();
    const revisions = await listRevisions(sent.publicId);
    expect(revisions.map(({ answers }) => (JSON.parse(answers) as Answers).project?.name)).toEqual([
      'Saltwick barn roofs',
      'Saltwick barns and byre',
    ]);
    expect((await readMail(sent.publicId)).map(({ kind }) => kind)).toEqual([
      'submitted',
      'deficiency',
      'submitted',
    ]);
  });

  it('can be changed while a reviewer takes it, for that touches no answer', async () => {
    const sent = await sendBack(solarAnswers());
    const draft = await saveSection(applicant, await openDraft(sent.publicId), 'papers', { files: [] });
    const take = { version: draft.version, reviewer: 'me' };
    await reviewer.send('put', `/api/applications/${sent.publicId}/reviewer`, take).expect(200);
    const view = await press(draft);
    expect(view.stage).toBe('submitted');
  });
});
