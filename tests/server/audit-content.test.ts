import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { proFormaRuleSet } from '../../shared/rules/pro-forma.ts';
import { fillDraft, pressSubmit } from '../support/fixture-handing-in.ts';
import { finishRun, getRow, handIn, makeFindings } from '../support/fixture-applications.ts';
import { solarAnswers } from '../support/fixture-answers.ts';
import { act, makeDecidable, makeFixtureDesk, type FixtureDesk } from '../support/fixture-desk.ts';

let desk: FixtureDesk;

beforeAll(async () => {
  desk = await makeFixtureDesk();
});

afterAll(() => desk.stop());

interface Entry {
  action: string;
  subject: string;
  before: unknown;
  after: { about?: unknown };
}

async function findEntry(publicId: string, action: string): Promise<Entry> {
  const trail = (await desk.as.auditor.get(`/api/applications/${publicId}/audit`).expect(200))
    .body as Entry[];
  const entry = trail.findLast((candidate) => candidate.action === action);
  if (entry === undefined) throw new Error(`No entry ${action}`);
  return entry;
}

async function getRun(publicId: string) {
  const run = await desk.deps.db('runs').where({ public_id: publicId }).first();
  return run as { basis_sha256: Buffer; result_sha256: Buffer };
}

describe('the trail tells what was decided, not only that something was', () => {
  it('of a decision: run, basis, result, kind, reason, conditions and what was set aside', async () => {
    const outside = {
      id: 'contribution',
      verdict: 'outside',
      value: 12,
      consequence: 'supplemental',
    } as const;
    const { publicId, runId } = await makeDecidable(desk, makeFindings([outside]));
    const aside = { question: 'contribution', reason: 'The recloser is replaced.' };
    await desk.as.reviewer.send('put', `/api/runs/${runId}/waivers`, aside).expect(200);
    const run = await getRun(runId);
    const waived = { question: 'contribution', element: '', reason: aside.reason, runId };
    expect(await findEntry(publicId, 'set-finding-aside')).toMatchObject({
      subject: `run:${runId}`,
      after: { ...waived, basisSha256: run.basis_sha256.toString('hex') },
    });

    const body = { kind: 'approve', runId, reason: 'Answered.', conditions: 'No export before June.' };
    const decided = await act(desk, 'reviewer', publicId, { path: 'decision', body });
    expect(decided.status).toBe(200);
    expect((await findEntry(publicId, 'approve')).after.about).toEqual({
      ...body,
      basisSha256: run.basis_sha256.toString('hex'),
      resultSha256: run.result_sha256.toString('hex'),
      setAside: [
        { question: 'contribution', element: '', reason: aside.reason, by: 'Mira Holt', agreedBy: null },
      ],
    });
  });

  it('of a confirmation: the place in the queue and the rules that were bound', async () => {
    const { publicId } = await makeDecidable(desk);
    const { id } = await getRow(desk.deps.db, publicId);
    const place = await desk.deps.db('queue_entries').where({ application_id: id }).first('position');
    expect((await findEntry(publicId, 'confirm-complete')).after.about).toEqual({
      queuePosition: place.position,
      ruleSet: { code: 'pro-forma', number: proFormaRuleSet.number },
    });
  });

  it('of a deficiency: what was asked for', async () => {
    const { publicId } = await handIn(desk.deps.db, desk.world, new Date());
    const items = [{ section: 'site', text: 'Where is it?' }];
    await act(desk, 'reviewer', publicId, { path: 'deficiency', body: { items } });
    expect((await findEntry(publicId, 'ask-for-missing')).after.about).toEqual({ items });
  });

  it('of a submission: the revision, the hash of its project, and who attested it', async () => {
    const draft = await fillDraft(desk.as.applicant, solarAnswers());
    expect((await pressSubmit(desk.as.applicant, draft)).status).toBe(200);
    const { revisionId } = await getRow(desk.deps.db, draft.applicationId);
    const revision = await desk.deps.db('application_revisions').where({ id: revisionId }).first();
    expect((await findEntry(draft.applicationId, 'submit')).after.about).toEqual({
      revisionNumber: 1,
      projectSha256: (revision.project_sha256 as Buffer).toString('hex'),
      attestedBy: 'Ada Brenn',
    });
  });

  it('of a folder that is taken: the reviewer by name and public id, never by the number of a row', async () => {
    const { publicId, preliminaryRunId } = await handIn(desk.deps.db, desk.world, new Date());
    await finishRun(desk.deps.db, preliminaryRunId, makeFindings(), new Date());
    const put = (person: 'reviewer' | 'secondReviewer', reviewer: 'me' | null) =>
      act(desk, person, publicId, { method: 'put', path: 'reviewer', body: { reviewer } });
    await put('reviewer', 'me');
    await put('secondReviewer', 'me');
    const nameOf = ({ name, publicId: id }: { name: string; publicId: string }) => ({ name, publicId: id });
    const { reviewer, secondReviewer } = desk.world.people;
    const taken = await findEntry(publicId, 'take');
    expect(taken).toMatchObject({
      before: { reviewer: nameOf(reviewer) },
      after: { reviewer: nameOf(secondReviewer) },
    });
    expect(JSON.stringify(taken)).not.toContain('reviewerId');
    await put('secondReviewer', null);
    expect((await findEntry(publicId, 'put-back')).after).toMatchObject({ reviewer: null });
  });
});
