import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { proFormaRuleSet } from '../../shared/rules/pro-forma.ts';
import type { ApplicationView } from '../../shared/schemas/applications.ts';
import { finishRun, handIn, makeFindings } from '../support/fixture-applications.ts';
import { act, decide, makeFixtureDesk, screen, see, type FixtureDesk } from '../support/fixture-desk.ts';
import { solarAnswers } from '../support/fixture-answers.ts';
import { readProblem } from '../support/test-app.ts';

let desk: FixtureDesk;

beforeAll(async () => {
  desk = await makeFixtureDesk();
});

afterAll(() => desk.stop());

/** Handed in, and its preliminary run finished. */
async function submit(): Promise<string> {
  const { publicId, preliminaryRunId } = await handIn(desk.deps.db, desk.world, new Date());
  await finishRun(desk.deps.db, preliminaryRunId, makeFindings(), new Date());
  return publicId;
}

async function listMails(publicId: string) {
  const rows = await desk.deps
    .db('outbox')
    .join('applications', 'applications.id', 'outbox.application_id')
    .where('applications.public_id', publicId)
    .orderBy('outbox.id')
    .select('outbox.kind', 'recipient', 'payload');
  return rows.map((row: { kind: string; recipient: string; payload: string }) => ({
    kind: row.kind,
    recipient: row.recipient,
    payload: JSON.parse(row.payload) as Record<string, unknown>,
  }));
}

/** Writes and submits the form as a browser does. */
async function submitForm(publicId: string): Promise<ApplicationView> {
  const applicant = desk.as.applicant;
  const path = `/api/applications/${publicId}`;
  for (const [section, answers] of Object.entries(solarAnswers())) {
    const { version } = (await applicant.get(`${path}/draft`).expect(200)).body as { version: number };
    await applicant.send('put', `${path}/draft/${section}`, { version, answers }).expect(200);
  }
  const { version } = (await applicant.get(`${path}/draft`).expect(200)).body as { version: number };
  const body = { version, attestedBy: 'Ada Brenn', agrees: true };
  return (await applicant.send('post', `${path}/submission`, body).expect(200)).body as ApplicationView;
}

describe('the life of an application', () => {
  it('goes from the form over completeness and screening to a decision, with a mail and an entry for each step', async () => {
    const draft = (await desk.as.applicant.send('post', '/api/applications', {}).expect(201)).body as {
      applicationId: string;
    };
    const publicId = draft.applicationId;
    const submitted = await submitForm(publicId);
    expect(submitted).toMatchObject({
      stage: 'submitted',
      waitingOn: 'utility',
      run: { kind: 'preliminary' },
    });
    await screen(desk, submitted.run!.publicId);

    const confirmed = (await act(desk, 'reviewer', publicId, { path: 'completeness' }))
      .body as ApplicationView;
    expect(confirmed).toMatchObject({
      stage: 'initial-review',
      queuePosition: 1,
      aheadCount: 0,
      ruleSet: { code: 'pro-forma', number: proFormaRuleSet.number },
      run: { kind: 'official', state: 'queued', basis: { modelCode: 'FX', ahead: [], revisionNumber: 1 } },
    });
    const runId = confirmed.run!.publicId;
    expect(desk.enqueued).toHaveLength(2);
    await screen(desk, runId);

    const decided = (await decide(desk, publicId, runId)).body as ApplicationView;
    expect(decided).toMatchObject({
      stage: 'approved',
      decision: { kind: 'approve', runId, by: 'Mira Holt', reason: 'As the findings say.' },
    });
    expect(decided.clocks.map(({ kind, state }) => [kind, state])).toEqual([
      ['completeness', 'stopped'],
      ['initial-review', 'stopped'],
      ['tender', 'running'],
    ]);

    const mails = await listMails(publicId);
    expect(mails.map(({ kind, recipient }) => [kind, recipient])).toEqual([
      ['submitted', 'ada@saltwick.example'],
      ['complete', 'ada@saltwick.example'],
      ['decision', 'ada@saltwick.example'],
    ]);
    expect(mails[1]?.payload).toMatchObject({
      queuePosition: 1,
      reviewDueOn: confirmed.clocks.find(({ kind }) => kind === 'initial-review')?.dueOn,
    });
    expect(mails[2]?.payload).toMatchObject({ decision: 'approve', runPublicId: runId, conditions: null });

    const audit = (await desk.as.auditor.get(`/api/applications/${publicId}/audit`).expect(200)).body as {
      action: string;
      actor: string;
    }[];
    expect(audit.map(({ action }) => action)).toEqual(['submit', 'confirm-complete', 'approve']);
    expect(audit[1]?.actor).toMatch(/^Mira Holt, reviewer, /);
  });

  it('shows the applicant no names, nodes or official findings before the decision', async () => {
    const publicId = await submit();
    const confirmed = (await act(desk, 'reviewer', publicId, { path: 'completeness' }))
      .body as ApplicationView;
    const seen = await see(desk.as.applicant, publicId);
    expect(seen.run).toMatchObject({ kind: 'preliminary', basis: null, stale: null, summary: null });
    expect(seen.events.at(-1)).toMatchObject({ event: 'confirm-complete', actor: 'the utility' });
    await desk.as.applicant.get(`/api/runs/${confirmed.run!.publicId}`).expect(404);
    expect(JSON.stringify(seen)).not.toContain('Mira');
  });
});

describe('what is missing', () => {
  it('is asked for with a limit for the answer, and handing in again goes on where the check stood', async () => {
    const publicId = await submit();
    const items = [{ section: 'papers', text: 'The one-line diagram is missing.' }];
    const asked = (await act(desk, 'reviewer', publicId, { path: 'deficiency', body: { items } }))
      .body as ApplicationView;
    expect(asked).toMatchObject({ stage: 'incomplete', waitingOn: 'applicant' });
    expect(asked.requests).toMatchObject([{ items, askedBy: 'Mira Holt', answeredAt: null }]);
    expect(asked.clocks.map(({ kind, state }) => [kind, state])).toEqual([
      ['completeness', 'paused'],
      ['cure', 'running'],
    ]);
    const [mail] = (await listMails(publicId)).filter(({ kind }) => kind === 'deficiency');
    expect(mail?.payload).toMatchObject({ items, replyDueOn: asked.clocks[1]?.dueOn });

    const again = await submitForm(publicId);
    expect(again).toMatchObject({ stage: 'submitted', revisionNumber: 2 });
    expect(again.requests[0]?.answeredAt).not.toBeNull();
    expect(again.clocks.map(({ kind, state }) => [kind, state])).toEqual([
      ['completeness', 'running'],
      ['cure', 'stopped'],
    ]);
  });

  it('must be named: an empty list is refused at its field', async () => {
    const publicId = await submit();
    const answer = await act(desk, 'reviewer', publicId, { path: 'deficiency', body: { items: [] } });
    expect(answer.status).toBe(400);
    expect(readProblem(answer).errors).toEqual([
      { path: 'items', message: 'Name at least one thing that is missing' },
    ]);
  });
});

describe('two reviewers at once', () => {
  it('one takes the application, the other is told who was first', async () => {
    const publicId = await submit();
    const { version } = await see(desk.as.reviewer, publicId);
    const take = (person: 'reviewer' | 'secondReviewer') =>
      desk.as[person].send('put', `/api/applications/${publicId}/reviewer`, { version, reviewer: 'me' });
    const answers = await Promise.all([take('reviewer'), take('secondReviewer')]);
    expect(answers.map(({ status }) => status).sort()).toEqual([200, 409]);
    const winner = answers[0]?.status === 200 ? 'Mira Holt' : 'Ned Ivers';
    const loser = answers.find(({ status }) => status === 409)!;
    expect(readProblem(loser)).toMatchObject({ code: 'version-conflict', status: 409 });
    expect(readProblem(loser).title).toMatch(
      new RegExp(`^${winner} changed this application on \\d+ \\w+ \\d{4}`),
    );
    expect((await see(desk.as.auditor, publicId)).reviewer?.name).toBe(winner);
  });

  it('a completeness confirmed twice gives one place in the queue', async () => {
    const publicId = await submit();
    const { version } = await see(desk.as.reviewer, publicId);
    const confirm = (person: 'reviewer' | 'secondReviewer') =>
      desk.as[person].send('post', `/api/applications/${publicId}/completeness`, { version });
    const answers = await Promise.all([confirm('reviewer'), confirm('secondReviewer')]);
    expect(answers.map(({ status }) => status).sort()).toEqual([200, 409]);
    const { id } = await desk.deps.db('applications').where({ public_id: publicId }).first('id');
    expect(await desk.deps.db('queue_entries').where({ application_id: id })).toHaveLength(1);
  });

  it('projects confirmed at once get places of their own, one after the other', async () => {
    const ids = await Promise.all([submit(), submit(), submit()]);
    const answers = await Promise.all(
      ids.map((publicId) => act(desk, 'reviewer', publicId, { path: 'completeness' })),
    );
    const views = answers
      .map(({ body }) => body as ApplicationView)
      .sort((one, other) => one.queuePosition! - other.queuePosition!);
    expect(new Set(views.map(({ queuePosition }) => queuePosition)).size).toBe(3);
    // Each is screened on the feeder as it will be with those before it, and no others.
    const [first, second, third] = views.map(({ run }) => run!.basis!.ahead);
    expect(second).toEqual([...first!, views[0]!.reference]);
    expect(third).toEqual([...second!, views[1]!.reference]);
  });
});

describe('taking and putting back', () => {
  it('leaves the application with nobody again, and the trail tells of both', async () => {
    const publicId = await submit();
    const put = (reviewer: 'me' | null) =>
      act(desk, 'reviewer', publicId, { method: 'put', path: 'reviewer', body: { reviewer } });
    expect((await put('me')).body.reviewer.name).toBe('Mira Holt');
    expect((await put(null)).body.reviewer).toBeNull();
    const audit = (await desk.as.reviewer.get(`/api/applications/${publicId}/audit`)).body as {
      action: string;
    }[];
    expect(audit.map(({ action }) => action)).toEqual(['submit', 'take', 'put-back']);
  });

  it('tells the applicant of "the utility" only when both change it', async () => {
    const publicId = await submit();
    const { version } = await see(desk.as.applicant, publicId);
    await act(desk, 'reviewer', publicId, { method: 'put', path: 'reviewer', body: { reviewer: 'me' } });
    const body = { version, reason: 'The roof is sold.' };
    const answer = await desk.as.applicant.send('post', `/api/applications/${publicId}/withdrawal`, body);
    expect(answer.status).toBe(409);
    expect(readProblem(answer).title).toMatch(/^The utility changed this application on /);
  });
});

describe('steps recorded by hand', () => {
  it('refuse a step that the stage does not have, and one that is not recorded by hand', async () => {
    const publicId = await submit();
    const record = (event: string) =>
      act(desk, 'reviewer', publicId, { path: 'moves', body: { event, note: 'It happened.' } });
    expect(readProblem(await record('tender-agreement'))).toMatchObject({ status: 409, code: 'wrong-stage' });
    expect(readProblem(await record('approve'))).toMatchObject({ status: 400, errors: [{ path: 'event' }] });
  });

  it('let an application lapse only when the applicant’s limit has passed', async () => {
    const publicId = await submit();
    const items = [{ section: 'site', text: 'Where is it?' }];
    await act(desk, 'reviewer', publicId, { path: 'deficiency', body: { items } });
    const lapse = () =>
      act(desk, 'reviewer', publicId, { path: 'moves', body: { event: 'lapse', note: 'No answer came.' } });
    expect(readProblem(await lapse())).toMatchObject({ status: 422, code: 'not-lapsed' });
    await desk.deps.db('clocks').where({ kind: 'cure' }).update({ due_on: '2020-01-01' });
    expect((await lapse()).body).toMatchObject({ stage: 'lapsed', waitingOn: 'nobody' });
  });
});

describe('roles', () => {
  it.each([
    ['planner', 'put', 'reviewer', { reviewer: 'me' }, 403],
    ['auditor', 'post', 'completeness', {}, 403],
    ['administrator', 'post', 'deficiency', { items: [{ section: 'site', text: 'Missing' }] }, 403],
    ['applicant', 'post', 'completeness', {}, 403],
    ['rival', 'post', 'withdrawal', { reason: 'Not mine' }, 404],
    ['reviewer', 'post', 'withdrawal', { reason: 'Not mine' }, 403],
  ] as const)('%s may not %s %s', async (person, method, path, body, status) => {
    const publicId = await submit();
    const answer = await act(desk, person, publicId, { method, path, body });
    expect(answer.status).toBe(status);
  });

  it('keep the trail from applicants and planners', async () => {
    const publicId = await submit();
    await desk.as.applicant.get(`/api/applications/${publicId}/audit`).expect(403);
    await desk.as.planner.get(`/api/applications/${publicId}/audit`).expect(403);
    await desk.as.administrator.get(`/api/applications/${publicId}/audit`).expect(200);
  });
});
