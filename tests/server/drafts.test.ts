import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { DraftView } from '../../shared/schemas/applications.ts';
import { biogasAnswers, rooftopAnswers, solarAnswers } from '../support/fixture-answers.ts';
import { fillDraft, handIn, saveSection } from '../support/fixture-handing-in.ts';
import { makeFixtureWorld, type FixtureWorld } from '../support/fixture-world.ts';
import { makeTestApp, readProblem, signInAs, type Browser, type TestApp } from '../support/test-app.ts';

let desk: TestApp;
let world: FixtureWorld;
let applicant: Browser;
let colleague: Browser;
let rival: Browser;

beforeAll(async () => {
  desk = await makeTestApp();
  world = await makeFixtureWorld(desk.deps.db);
  applicant = await signInAs(desk.app, world.people.applicant);
  colleague = await signInAs(desk.app, world.people.colleague);
  rival = await signInAs(desk.app, world.people.rival);
});
afterAll(() => desk.stop());

async function trySave(browser: Browser, draft: DraftView, section: string, answers: unknown) {
  const { applicationId, version } = draft;
  return browser.send('put', `/api/applications/${applicationId}/draft/${section}`, { version, answers });
}

const stateOf = (draft: DraftView, section: string) =>
  draft.sections.find((candidate) => candidate.section === section)?.state;

describe('a draft', () => {
  it('begins empty, with every part not started', async () => {
    const draft = (await applicant.send('post', '/api/applications', {}).expect(201)).body as DraftView;
    expect(draft).toMatchObject({ reference: 'Draft', version: 1, answers: {}, papers: [], request: null });
    expect(draft.sections.map(({ state }) => state)).toEqual(Array(5).fill('not-started'));
  });

  it('keeps each part as it is saved, and is there for a colleague', async () => {
    const draft = await fillDraft(applicant, { project: solarAnswers().project, site: solarAnswers().site });
    const seen = (await colleague.get(`/api/applications/${draft.applicationId}/draft`).expect(200)).body;
    expect(seen).toEqual(draft);
    expect(draft.answers).toEqual({ project: solarAnswers().project, site: solarAnswers().site });
    expect(draft.version).toBe(3);
    expect(stateOf(draft, 'site')).toBe('completed');
  });

  it('refuses a part that is wrong, with paths inside that part, and keeps what was saved before', async () => {
    const draft = await fillDraft(applicant, { project: solarAnswers().project });
    const answer = await trySave(applicant, draft, 'equipment', {
      units: [{ source: 'nameplate', kind: 'pv-inverter', nameplate: { kva: -1, kw: 5 }, count: 0 }],
    });
    const { status, errors } = readProblem(answer);
    expect(status).toBe(400);
    expect(errors.map(({ path }) => path)).toEqual(
      expect.arrayContaining(['units.0.nameplate.kva', 'units.0.nameplate.kv', 'units.0.count']),
    );
    const after = await applicant.get(`/api/applications/${draft.applicationId}/draft`);
    expect(after.body).toEqual(draft);
  });

  it('refuses a place that no feeder reaches, and a connection that does not fit feeder and units', async () => {
    const { site, equipment, connection } = solarAnswers();
    const draft = await fillDraft(applicant, { site, equipment });
    const atSea = readProblem(await trySave(applicant, draft, 'site', { lat: 40, lng: -31 }));
    expect(atSea.errors).toEqual([
      { path: 'lat', message: 'No feeder is within 600 metres of this place: move the pin' },
    ]);
    const rating = { source: 'record', equipmentId: 'mediumTransformer' };
    const wrong = { ...connection, transformer: { ...connection.transformer, rating } };
    const misfit = readProblem(await trySave(applicant, draft, 'connection', wrong));
    expect(misfit.errors.map(({ path }) => path)).toEqual(['transformer.rating.equipmentId']);
  });

  it('shows a part as in progress once another part no longer fits it', async () => {
    const { equipment, connection, site } = solarAnswers();
    const draft = await fillDraft(applicant, { site, equipment, connection });
    expect(stateOf(draft, 'connection')).toBe('completed');
    const changed = await saveSection(applicant, draft, 'equipment', biogasAnswers().equipment);
    expect(stateOf(changed, 'equipment')).toBe('completed');
    expect(stateOf(changed, 'connection')).toBe('in-progress');
  });

  it('shows the site as in progress when the connection asks for phases that are not near', async () => {
    const { site } = rooftopAnswers();
    const draft = await fillDraft(applicant, { site });
    expect(stateOf(draft, 'site')).toBe('completed');
    const asked = await saveSection(applicant, draft, 'connection', { phases: 'ABC' });
    expect(stateOf(asked, 'site')).toBe('in-progress');
  });

  it('takes no file of another organisation', async () => {
    const draft = await fillDraft(rival, {});
    const pdf = Buffer.from('%PDF-1.7\n%%EOF\n');
    const uploaded = await applicant.send('post', '/api/files').attach('file', pdf, 'plan.pdf').expect(201);
    const { publicId: fileId } = uploaded.body as { publicId: string };
    const papers = { files: [{ fileId, purpose: 'site-plan' }] };
    const problem = readProblem(await trySave(rival, draft, 'papers', papers));
    expect(problem).toMatchObject({
      status: 400,
      errors: [{ path: 'files.0.fileId', message: 'That file is not one of yours' }],
    });
    const own = await saveSection(applicant, await fillDraft(applicant, {}), 'papers', papers);
    expect(own.papers).toMatchObject([{ publicId: fileId, name: 'plan.pdf', purpose: 'site-plan' }]);
    const twice = { files: [...papers.files, ...papers.files] };
    expect(readProblem(await trySave(applicant, own, 'papers', twice)).errors[0]?.path).toBe(
      'files.1.fileId',
    );
  });

  it('that a colleague changed meanwhile is refused with who and when, and nothing is lost', async () => {
    const draft = await fillDraft(applicant, {});
    await saveSection(colleague, draft, 'project', { ...solarAnswers().project, name: 'Renamed' });
    const problem = readProblem(await trySave(applicant, draft, 'site', solarAnswers().site));
    expect(problem).toMatchObject({ status: 409, code: 'version-conflict' });
    expect(problem.title).toMatch(
      /^Bo Carr changed the answers on \d+ \w+ \d{4}, \d\d:\d\d \S+: load the page/,
    );
    const { body } = await applicant.get(`/api/applications/${draft.applicationId}/draft`).expect(200);
    expect((body as DraftView).answers).toMatchObject({ project: { name: 'Renamed' } });
    const ahead = readProblem(
      await trySave(applicant, { ...draft, version: 99 }, 'site', solarAnswers().site),
    );
    expect(ahead.code).toBe('version-conflict');
  });

  it('is not there for another organisation nor for the utility', async () => {
    const { applicationId } = await fillDraft(applicant, { project: solarAnswers().project });
    const reviewer = await signInAs(desk.app, world.people.reviewer);
    await rival.get(`/api/applications/${applicationId}/draft`).expect(404);
    await rival.get(`/api/applications/${applicationId}`).expect(404);
    await reviewer.get(`/api/applications/${applicationId}`).expect(404);
    await applicant.get(`/api/applications/${applicationId}`).expect(200);
  });

  it('has no other parts than the form', async () => {
    const draft = await fillDraft(applicant, {});
    expect((await trySave(applicant, draft, 'constructor', {})).status).toBe(404);
  });

  it('can be thrown away, but not what was handed in', async () => {
    const { applicationId } = await fillDraft(applicant, { project: solarAnswers().project });
    await applicant.send('delete', `/api/applications/${applicationId}/draft`).expect(204);
    await applicant.get(`/api/applications/${applicationId}`).expect(404);
    const { publicId } = await handIn(applicant, solarAnswers());
    const answer = await applicant.send('delete', `/api/applications/${publicId}/draft`);
    expect(readProblem(answer)).toMatchObject({ status: 409, code: 'wrong-stage' });
    const edit = await trySave(applicant, { applicationId: publicId, version: 9 } as DraftView, 'papers', {});
    expect(readProblem(edit)).toMatchObject({ status: 409, code: 'wrong-stage' });
  });
});
