import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { finishRun, getRow, handIn, makeFindings } from '../support/fixture-applications.ts';
import { act, decide, makeDecidable, makeFixtureDesk, type FixtureDesk } from '../support/fixture-desk.ts';
import { readProblem } from '../support/test-app.ts';

let desk: FixtureDesk;
let publicId: string;
let preliminaryRunId: number;

beforeAll(async () => {
  desk = await makeFixtureDesk();
});

afterAll(() => desk.stop());

beforeEach(async () => {
  ({ publicId, preliminaryRunId } = await handIn(desk.deps.db, desk.world, new Date()));
});

const setRun = (changes: object) => desk.deps.db('runs').where({ id: preliminaryRunId }).update(changes);
const confirm = () => act(desk, 'reviewer', publicId, { path: 'completeness' });

async function countPlaces(): Promise<number> {
  const { id } = await getRow(desk.deps.db, publicId);
  return (await desk.deps.db('queue_entries').where({ application_id: id })).length;
}

describe('a place in the queue', () => {
  it.each(['queued', 'running'])('is not given while the preliminary run is %s', async (state) => {
    await setRun({ state });
    expect(readProblem(await confirm())).toMatchObject({
      status: 409,
      code: 'preliminary-run-open',
      title: 'The preliminary screening is not finished; confirm the application complete when it is',
    });
    expect(await countPlaces()).toBe(0);
  });

  it('is not given to a project whose screening failed, which would stop everybody behind it', async () => {
    await setRun({ state: 'failed', error: 'The screening could not be computed.' });
    const problem = readProblem(await confirm());
    expect(problem).toMatchObject({ status: 409, code: 'preliminary-run-failed' });
    expect(problem.title).toContain('Ask for what is missing');
    expect(await countPlaces()).toBe(0);
    const items = [{ section: 'equipment', text: 'The transformer has no size.' }];
    expect((await act(desk, 'reviewer', publicId, { path: 'deficiency', body: { items } })).status).toBe(200);
  });

  it('is given when a later preliminary run came to its end', async () => {
    await setRun({ state: 'failed', error: 'The screening could not be computed.' });
    const again = await desk.as.reviewer.send('post', `/api/applications/${publicId}/runs`, {});
    const { id } = await desk.deps.db('runs').where({ public_id: again.body.publicId }).first('id');
    await finishRun(desk.deps.db, id as number, makeFindings(), new Date());
    expect((await confirm()).status).toBe(200);
    expect(await countPlaces()).toBe(1);
  });
});

describe('a folder that lies with a colleague', () => {
  const take = (id: string) =>
    act(desk, 'secondReviewer', id, { method: 'put', path: 'reviewer', body: { reviewer: 'me' } });
  const held = { status: 409, code: 'held-by-another', title: 'Ned Ivers has this folder; take it first' };

  it('is neither confirmed complete nor sent back by another reviewer', async () => {
    await finishRun(desk.deps.db, preliminaryRunId, makeFindings(), new Date());
    await take(publicId);
    const items = [{ section: 'site', text: 'Where is it?' }];
    expect(readProblem(await confirm())).toMatchObject(held);
    const asked = await act(desk, 'reviewer', publicId, { path: 'deficiency', body: { items } });
    expect(readProblem(asked)).toMatchObject(held);
    expect((await getRow(desk.deps.db, publicId)).stage).toBe('submitted');
  });

  it('is not decided by another reviewer, who may take it first', async () => {
    const decidable = await makeDecidable(desk);
    await take(decidable.publicId);
    expect(readProblem(await decide(desk, decidable.publicId, decidable.runId))).toMatchObject(held);
    const body = { reviewer: 'me' };
    await act(desk, 'reviewer', decidable.publicId, { method: 'put', path: 'reviewer', body });
    expect((await decide(desk, decidable.publicId, decidable.runId)).status).toBe(200);
  });
});
