import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { Problem } from '../../shared/schemas/problems.ts';
import type { TrialParts, TrialView, VariantView } from '../../shared/schemas/trials.ts';
import { screenRun } from '../../workers/jobs/screen.ts';
import { insertFixtureApplication, insertFixtureRun } from '../support/fixture-runs.ts';
import { makeFixtureDesk, type FixtureDesk } from '../support/fixture-desk.ts';
import { makeScreening } from '../support/fixture-screening.ts';

let desk: FixtureDesk;
let publicId: string;
let runId: string;
beforeAll(async () => {
  desk = await makeFixtureDesk();
  const { db } = desk.deps;
  const application = await insertFixtureApplication(db, desk.world);
  const run = await insertFixtureRun(db, application);
  await screenRun(makeScreening(db), run.id);
  publicId = application.publicId;
  runId = run.publicId;
});
afterAll(() => desk.stop());

const send = (body: object, path = 'trials') =>
  desk.as.reviewer.send('post', `/api/applications/${publicId}/${path}`, body);

const half = [{ kind: 'size', factor: 0.5 }];

function valueOf(pairs: TrialView['pairs'], id: string, side: 'run' | 'trial'): number {
  const value = pairs.map((pair) => pair[side]).find((finding) => finding?.id === id)?.value;
  if (typeof value !== 'number') throw new Error(`No number for ${id}`);
  return value;
}

describe('a trial', () => {
  it('of half the size shows twice the short-circuit ratio beside the run’s, and changes no run', async () => {
    const answer = await send({ runId, changes: half });
    expect(answer.status).toBe(200);
    const { pairs } = answer.body as TrialView;
    const ofRun = valueOf(pairs, 'short-circuit-ratio', 'run');
    expect(valueOf(pairs, 'short-circuit-ratio', 'trial')).toBeCloseTo(2 * ofRun, 9);
    expect(valueOf(pairs, 'contribution', 'trial')).toBeLessThan(valueOf(pairs, 'contribution', 'run'));
    const runs = await desk.as.reviewer.get(`/api/applications/${publicId}/runs`);
    expect(runs.body).toHaveLength(1);
  });

  it('of what is as it was gives the run’s findings again', async () => {
    const answer = await send({ runId, changes: [{ kind: 'size', factor: 1 }] });
    const { pairs } = answer.body as TrialView;
    expect(pairs.length).toBeGreaterThan(3);
    for (const { run, trial } of pairs) expect(trial).toEqual(run);
  });

  it('that names what is not there says which field, what it got and what it expected', async () => {
    const answer = await send({
      runId,
      changes: [{ kind: 'device', element: 'nothing', interruptingKa: 8 }],
    });
    expect(answer.status).toBe(400);
    expect((answer.body as Problem).errors).toEqual([
      { path: 'changes.0.element', message: 'Got "nothing", expected the id of a device' },
    ]);
  });

  it('with a number beyond its bounds is refused at the number', async () => {
    const answer = await send({ runId, changes: [{ kind: 'size', factor: -1 }] });
    expect(answer.status).toBe(400);
    expect((answer.body as Problem).errors.map(({ path }) => path)).toEqual(['changes.0.factor']);
  });

  it('of another application’s run is not there', async () => {
    const other = await insertFixtureApplication(desk.deps.db, desk.world, { name: 'Other' });
    const answer = await desk.as.reviewer.send('post', `/api/applications/${other.publicId}/trials`, {
      runId,
      changes: half,
    });
    expect(answer.status).toBe(404);
  });

  it('may name the transformer, the machine and the devices of the run’s study', async () => {
    const answer = await desk.as.reviewer.get(`/api/runs/${runId}/trial-parts`);
    const parts = answer.body as TrialParts;
    expect(parts.transformers.map(({ id }) => id)).toEqual(['step-up']);
    expect(parts.machines.map(({ id }) => id)).toEqual(['machine']);
    expect(parts.nodes.map(({ id }) => id)).toEqual(['n2', 'site']);
    expect(parts.devices.length).toBeGreaterThan(0);
  });
});

describe('a kept trial', () => {
  it('shows its name, who kept it and its changes, is refused twice, and can be deleted', async () => {
    const kept = await send({ runId, changes: half, name: 'Half of it' }, 'variants');
    expect(kept.status).toBe(201);
    expect((await send({ runId, changes: half, name: 'half of it' }, 'variants')).status).toBe(409);

    const listed = (await desk.as.reviewer.get(`/api/applications/${publicId}/variants`))
      .body as VariantView[];
    expect(listed).toEqual([kept.body]);
    expect(listed[0]).toMatchObject({
      name: 'Half of it',
      changes: half,
      keptBy: desk.world.people.reviewer.name,
    });

    const path = `/api/applications/${publicId}/variants?variant=${listed[0]!.publicId}`;
    expect((await desk.as.reviewer.send('delete', path, {})).status).toBe(204);
    expect((await desk.as.reviewer.get(`/api/applications/${publicId}/variants`)).body).toEqual([]);
    expect((await desk.as.reviewer.send('delete', path, {})).status).toBe(404);
  });

  it('is nothing that an applicant sees', async () => {
    expect((await desk.as.applicant.get(`/api/applications/${publicId}/variants`)).status).toBe(403);
  });
});
