import { createHash } from 'node:crypto';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { findRun } from '../../db/repositories/runs.ts';
import { proFormaRuleSet } from '../../shared/rules/pro-forma.ts';
import { listNotAsked } from '../../shared/schemas/rule-sets.ts';
import type { RunView } from '../../shared/schemas/runs.ts';
import { finishRun, handIn, makeFindings } from '../support/fixture-applications.ts';
import {
  decide,
  makeConfirmed,
  makeDecidable,
  makeFixtureDesk,
  screen,
  see,
  type FixtureDesk,
} from '../support/fixture-desk.ts';
import { readProblem } from '../support/test-app.ts';

let desk: FixtureDesk;

beforeAll(async () => {
  desk = await makeFixtureDesk();
});

afterAll(() => desk.stop());

const duty = { id: 'interrupting-duty', unit: '%', comparison: '<=', limit: 87.5 } as const;
const findings = [
  ...makeFindings([
    { id: 'contribution', verdict: 'outside', value: 12, before: 3, element: 'n2', note: 'At n2.' },
  ]),
  { ...makeFindings().find(({ id }) => id === duty.id)!, value: 60, element: 'cb2' },
];

async function getRun(person: 'applicant' | 'reviewer', runId: string): Promise<RunView> {
  return (await desk.as[person].get(`/api/runs/${runId}`).expect(200)).body as RunView;
}

async function makeScreened(): Promise<{ publicId: string; runId: string }> {
  const { publicId, preliminaryRunId } = await handIn(desk.deps.db, desk.world, new Date());
  await finishRun(desk.deps.db, preliminaryRunId, findings, new Date());
  return { publicId, runId: (await see(desk.as.reviewer, publicId)).run!.publicId };
}

describe('what an applicant sees of a run', () => {
  it('is each question’s deciding answer without place, note and what was there before', async () => {
    const { runId } = await makeScreened();
    const run = await getRun('applicant', runId);
    expect(run).toMatchObject({
      kind: 'preliminary',
      state: 'finished',
      percent: 100,
      warnings: [],
      basis: null,
    });
    const contribution = run.findings.find(({ id }) => id === 'contribution');
    expect(contribution).toEqual({
      id: 'contribution',
      question: 'Does all generation together add little fault current?',
      verdict: 'outside',
      value: 12,
      comparison: '<=',
      limit: 10,
      unit: '%',
      consequence: 'none',
      source: 'SGIP 2.2.1.4',
    });
    expect(run.findings.filter(({ id }) => id === 'interrupting-duty').map(({ value }) => value)).toEqual([
      60,
    ]);
    expect(JSON.stringify(run)).not.toMatch(/"element":"|n2|cb2/);
    expect(run.notAskedYet).toEqual(listNotAsked(proFormaRuleSet));
  });

  it('is all of it for staff, with the basis it rests on', async () => {
    const { runId } = await makeScreened();
    const run = await getRun('reviewer', runId);
    expect(run.findings).toEqual(findings);
    expect(run).toMatchObject({
      warnings: ['a warning for the utility'],
      stale: false,
      basis: { modelCode: 'FX', modelVersion: 1, ruleSet: 'Federal pro forma, version 2', revisionNumber: 1 },
    });
    expect(run.basis!.basisSha256).toMatch(/^[0-9a-f]{64}$/);
  });

  it('is of an official run nothing until a decision rests on it', async () => {
    const { publicId, runId } = await makeDecidable(desk);
    await desk.as.applicant.get(`/api/runs/${runId}`).expect(404);
    await desk.as.rival.get(`/api/runs/${runId}`).expect(404);
    await decide(desk, publicId, runId);
    expect(await getRun('applicant', runId)).toMatchObject({ kind: 'official', stale: null });
    expect((await see(desk.as.applicant, publicId)).run?.publicId).toBe(runId);
    await desk.as.rival.get(`/api/runs/${runId}`).expect(404);
  });

  it('is how far it is while it works', async () => {
    const { publicId, preliminaryRunId } = await handIn(desk.deps.db, desk.world, new Date());
    const { run } = await see(desk.as.applicant, publicId);
    expect(run).toMatchObject({ state: 'queued', percent: 0, findings: [] });
    const steps = [
      { key: 'taken', label: 'Taken', percent: 2, at: new Date().toISOString() },
      { key: 'faults', label: 'Faults', percent: 40, at: new Date().toISOString() },
    ];
    await desk.deps
      .db('runs')
      .where({ id: preliminaryRunId })
      .update({ state: 'running', steps: JSON.stringify(steps) });
    expect(await getRun('applicant', run!.publicId)).toMatchObject({ state: 'running', percent: 40 });
  });

  it('says what went wrong in words, and the element at fault to staff only', async () => {
    const { publicId, preliminaryRunId } = await handIn(desk.deps.db, desk.world, new Date());
    const { run } = await see(desk.as.applicant, publicId);
    await desk.deps
      .db('runs')
      .where({ id: preliminaryRunId })
      .update({ state: 'failed', error: 'It could not be computed.', error_detail: 'line l9' });
    expect((await getRun('applicant', run!.publicId)).error).toBe('It could not be computed.');
    expect((await getRun('reviewer', run!.publicId)).error).toBe('It could not be computed. (line l9)');
  });
});

describe('the files of a run', () => {
  it('come as they were stored, byte for byte, as attachments for staff', async () => {
    const { publicId, preliminaryRunId } = await handIn(desk.deps.db, desk.world, new Date());
    const files = { study: Buffer.from('{"name":"Łódź",\n "x":1.0}'), result: Buffer.from('{"r":2}') };
    await finishRun(desk.deps.db, preliminaryRunId, findings, new Date(), files);
    const { run } = await see(desk.as.auditor, publicId);
    for (const part of ['study', 'result'] as const) {
      const answer = await desk.as.auditor
        .get(`/api/runs/${run!.publicId}/${part}`)
        .buffer(true)
        .parse((response, done) => {
          const chunks: Buffer[] = [];
          response.on('data', (chunk: Buffer) => chunks.push(chunk));
          response.on('end', () => done(null, Buffer.concat(chunks)));
        })
        .expect(200);
      expect((answer.body as Buffer).equals(files[part])).toBe(true);
      expect(answer.headers['content-type']).toMatch(/^application\/json/);
      expect(answer.headers['content-disposition']).toBe(
        `attachment; filename="${part}-${run!.publicId}.json"`,
      );
      expect(answer.headers['x-content-type-options']).toBe('nosniff');
    }
    const stored = createHash('sha256').update(files.study).digest('hex');
    expect(run!.basis!.studySha256).toBe(stored);
    await desk.as.applicant.get(`/api/runs/${run!.publicId}/study`).expect(403);
  });

  it('are not there before the run is finished', async () => {
    const { runId } = await makeConfirmed(desk);
    await desk.as.reviewer.get(`/api/runs/${runId}/result`).expect(404);
  });
});

describe('screening again', () => {
  const again = (publicId: string) => desk.as.reviewer.send('post', `/api/applications/${publicId}/runs`, {});

  it('gives the run that is under way when one is, and a new one when it is done', async () => {
    const { publicId, runId } = await makeConfirmed(desk);
    expect((await again(publicId).expect(202)).body).toMatchObject({ publicId: runId, state: 'queued' });
    await screen(desk, runId);
    const answer = (await again(publicId).expect(202)).body as RunView;
    expect(answer).toMatchObject({ kind: 'official', state: 'queued' });
    expect(answer.publicId).not.toBe(runId);
    const { id } = (await findRun(desk.deps.db, answer.publicId))!;
    expect(desk.enqueued.at(-1)).toEqual({ runId: id, attempt: 0 });
    expect(readProblem(await decide(desk, publicId, runId))).toMatchObject({ code: 'stale-run' });
    const list = (await desk.as.planner.get(`/api/applications/${publicId}/runs`).expect(200))
      .body as RunView[];
    expect(list.map(({ kind }) => kind)).toEqual(['official', 'official', 'preliminary']);
    expect(list[1]).toMatchObject({ publicId: runId, findings: [] });
  });

  it('is preliminary before the queue, and refused after the decision', async () => {
    const { publicId } = await makeScreened();
    expect((await again(publicId).expect(202)).body).toMatchObject({ kind: 'preliminary' });
    const decided = await makeDecidable(desk);
    await decide(desk, decided.publicId, decided.runId);
    expect(readProblem(await again(decided.publicId))).toMatchObject({ status: 409, code: 'wrong-stage' });
  });

  it('goes on when the queue cannot be reached: the row waits for the sweep', async () => {
    const { publicId } = await makeScreened();
    const { queue } = desk.deps;
    desk.deps.queue = { ...queue, enqueue: () => Promise.reject(new Error('no Redis')) };
    try {
      const answer = (await again(publicId).expect(202)).body as RunView;
      expect((await findRun(desk.deps.db, answer.publicId))?.state).toBe('queued');
    } finally {
      desk.deps.queue = queue;
    }
  });
});
