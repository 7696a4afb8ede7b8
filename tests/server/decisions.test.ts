import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import type { RunView } from '../../shared/schemas/runs.ts';
import { getRow, handIn, makeFindings } from '../support/fixture-applications.ts';
import {
  decide,
  makeConfirmed,
  makeDecidable,
  makeFixtureDesk,
  see,
  type FixtureDesk,
} from '../support/fixture-desk.ts';
import { readProblem } from '../support/test-app.ts';

let desk: FixtureDesk;

beforeAll(async () => {
  desk = await makeFixtureDesk();
});

afterAll(() => desk.stop());

// Each test begins with an empty queue.
beforeEach(async () => {
  await desk.deps.db('queue_entries').whereNull('left_at').update({ left_at: new Date() });
  desk.enqueued.length = 0;
});

async function countDecisions(publicId: string): Promise<number> {
  const { id } = await getRow(desk.deps.db, publicId);
  return (await desk.deps.db('decisions').where({ application_id: id })).length;
}

const outside = { id: 'contribution', verdict: 'outside', value: 12, consequence: 'supplemental' } as const;
const loaded = {
  id: 'interrupting-duty',
  verdict: 'outside',
  value: 91,
  element: 'cb1',
  consequence: 'supplemental',
} as const;

describe('a decision', () => {
  it('is refused on a preliminary run, on another project’s run and on one that is not finished', async () => {
    const first = await makeConfirmed(desk);
    const second = await makeConfirmed(desk);
    const runs = (await desk.as.reviewer.get(`/api/applications/${first.publicId}/runs`)).body as RunView[];
    const preliminary = runs.find(({ kind }) => kind === 'preliminary')!;
    const codeOf = async (runId: string) => readProblem(await decide(desk, first.publicId, runId)).code;
    expect(await codeOf(preliminary.publicId)).toBe('run-preliminary');
    expect(await codeOf(second.runId)).toBe('run-unknown');
    expect(await codeOf('no-such-run')).toBe('run-unknown');
    expect(await codeOf(first.runId)).toBe('run-unfinished');
    expect(await countDecisions(first.publicId)).toBe(0);
  });

  it('is refused before completeness is confirmed', async () => {
    const { publicId } = await handIn(desk.deps.db, desk.world, new Date());
    expect(readProblem(await decide(desk, publicId, 'any'))).toMatchObject({
      status: 409,
      code: 'wrong-stage',
    });
  });

  it('is made once when two reviewers press at the same time', async () => {
    const { publicId, runId } = await makeDecidable(desk);
    const { version } = await see(desk.as.reviewer, publicId);
    const press = (person: 'reviewer' | 'secondReviewer', kind: string) =>
      desk.as[person].send('post', `/api/applications/${publicId}/decision`, {
        version,
        runId,
        kind,
        reason: 'Pressed at once.',
      });
    const answers = await Promise.all([press('reviewer', 'approve'), press('secondReviewer', 'deny')]);
    expect(answers.map(({ status }) => status).sort()).toEqual([200, 409]);
    expect(await countDecisions(publicId)).toBe(1);
  });

  it('is refused while the rules hold remembered values that nobody has confirmed', async () => {
    const { publicId, runId } = await makeDecidable(desk);
    const rules = desk.deps.db('rule_set_versions').where({ id: desk.world.ruleSetVersionId });
    await rules.clone().update({ confirmed_at: null });
    try {
      const problem = readProblem(await decide(desk, publicId, runId));
      expect(problem).toMatchObject({ status: 422, code: 'rule-set-unconfirmed' });
      expect(problem.title).toContain('IEEE C62.92.1');
    } finally {
      await rules.clone().update({ confirmed_at: new Date() });
    }
  });

  it('to deny takes the project out of the queue and screens those behind again', async () => {
    const first = await makeDecidable(desk);
    const second = await makeDecidable(desk);
    expect((await decide(desk, first.publicId, first.runId, 'deny')).body).toMatchObject({
      stage: 'denied',
      queuePosition: null,
    });
    const behind = await see(desk.as.reviewer, second.publicId);
    expect(behind.run).toMatchObject({ kind: 'official', state: 'queued', basis: { ahead: [] } });
    expect(behind.run!.publicId).not.toBe(second.runId);
  });
});

describe('open findings', () => {
  it('refuse an approval and are named, but not a study', async () => {
    const { publicId, runId } = await makeDecidable(desk, makeFindings([outside, loaded]));
    const problem = readProblem(await decide(desk, publicId, runId));
    expect(problem).toMatchObject({ status: 422, code: 'findings-open' });
    expect(problem.errors.map(({ message }) => message)).toEqual([
      'Does all generation together add little fault current?',
      'Does everything that interrupts faults keep its margin? (cb1)',
    ]);
    expect((await decide(desk, publicId, runId, 'require-study')).body).toMatchObject({
      stage: 'study-required',
    });
  });

  it.each([
    ['needs data', makeFindings([{ id: 'contribution', verdict: 'needs-data', value: null }])],
    ['was not answered at all', makeFindings().filter(({ id }) => id !== 'contribution')],
  ])('refuse an approval when a question %s', async (_what, findings) => {
    const { publicId, runId } = await makeDecidable(desk, findings);
    expect(readProblem(await decide(desk, publicId, runId))).toMatchObject({ code: 'findings-open' });
  });

  it('let an approval pass once each is set aside, and the reasons go into the letter', async () => {
    const { publicId, runId } = await makeDecidable(desk, makeFindings([outside, loaded]));
    const waive = (body: object) => desk.as.reviewer.send('put', `/api/runs/${runId}/waivers`, body);
    await waive({ question: 'contribution', reason: 'Studied by hand.' }).expect(200);
    expect((await decide(desk, publicId, runId)).status).toBe(422);
    // A waiver for the question is not one for the device.
    expect((await waive({ question: 'interrupting-duty', reason: 'No device named.' })).status).toBe(422);
    const second = await waive({ question: 'interrupting-duty', element: 'cb1', reason: 'Replaced in May.' });
    expect(second.body).toMatchObject({
      waivers: [
        { question: 'contribution', element: null, reason: 'Studied by hand.', by: 'Mira Holt' },
        { question: 'interrupting-duty', element: 'cb1', reason: 'Replaced in May.', by: 'Mira Holt' },
      ],
    });
    expect((await decide(desk, publicId, runId)).body).toMatchObject({ stage: 'approved' });

    const { id } = await getRow(desk.deps.db, publicId);
    const [mail] = await desk.deps.db('outbox').where({ application_id: id, kind: 'decision' });
    expect(JSON.parse(mail.payload)).toMatchObject({
      waivers: [
        { question: 'Does all generation together add little fault current?', reason: 'Studied by hand.' },
        { question: 'Does everything that interrupts faults keep its margin?', reason: 'Replaced in May.' },
      ],
    });
    expect(mail.payload).not.toContain('cb1');
  });

  it('are set aside only while they stand against something, and not after the decision', async () => {
    const { publicId, runId } = await makeDecidable(desk, makeFindings([outside]));
    const waive = (question: string) =>
      desk.as.reviewer.send('put', `/api/runs/${runId}/waivers`, { question, reason: 'For a reason.' });
    expect(readProblem(await waive('interrupting-duty'))).toMatchObject({
      status: 422,
      code: 'finding-settled',
    });
    expect(readProblem(await waive('no-such-question'))).toMatchObject({
      status: 422,
      code: 'finding-unknown',
    });
    await waive('contribution').expect(200);
    await decide(desk, publicId, runId);
    expect(readProblem(await waive('contribution'))).toMatchObject({ status: 409, code: 'run-decided' });
    const takeBack = await desk.as.reviewer.send(
      'delete',
      `/api/runs/${runId}/waivers?question=contribution`,
    );
    expect(readProblem(takeBack)).toMatchObject({ status: 409, code: 'run-decided' });
  });

  it('stand again when a waiver is taken back', async () => {
    const { publicId, runId } = await makeDecidable(desk, makeFindings([loaded]));
    const waivers = `/api/runs/${runId}/waivers`;
    const body = { question: 'interrupting-duty', element: 'cb1', reason: 'Replaced in May.' };
    await desk.as.reviewer.send('put', waivers, body).expect(200);
    const query = '?question=interrupting-duty&element=cb1';
    const answer = await desk.as.reviewer.send('delete', `${waivers}${query}`).expect(200);
    expect((answer.body as RunView).waivers).toEqual([]);
    await desk.as.reviewer.send('delete', `${waivers}${query}`).expect(404);
    expect(readProblem(await decide(desk, publicId, runId))).toMatchObject({ code: 'findings-open' });
    const audit = (await desk.as.reviewer.get(`/api/applications/${publicId}/audit`)).body as {
      action: string;
      after: unknown;
    }[];
    expect(audit.slice(-2)).toMatchObject([
      { action: 'set-finding-aside', after: { reason: 'Replaced in May.', element: 'cb1' } },
      { action: 'take-back-waiver', after: { reason: null } },
    ]);
  });
});
