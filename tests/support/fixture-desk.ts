import { expect } from 'vitest';
import { findRun } from '../../db/repositories/runs.ts';
import type { ApplicationView } from '../../shared/schemas/applications.ts';
import type { Finding } from '../../shared/schemas/findings.ts';
import { finishRun, getRow, handIn, makeFindings } from './fixture-applications.ts';
import { makeFixtureWorld, type FixturePerson, type FixtureWorld } from './fixture-world.ts';
import { signInAs, makeTestApp, type Browser, type TestApp } from './test-app.ts';

export type SignedIn = Record<FixturePerson, Browser>;

/** The whole server with the fixture world in its database, and everybody signed in. */
export interface FixtureDesk extends TestApp {
  world: FixtureWorld;
  as: SignedIn;
}

export async function makeFixtureDesk(): Promise<FixtureDesk> {
  const app = await makeTestApp();
  const world = await makeFixtureWorld(app.deps.db);
  const as: Partial<SignedIn> = {};
  for (const [key, person] of Object.entries(world.people)) {
    as[key as FixturePerson] = await signInAs(app.app, person);
  }
  return { ...app, world, as: as as SignedIn };
}

export async function see(browser: Browser, publicId: string): Promise<ApplicationView> {
  return (await browser.get(`/api/applications/${publicId}`).expect(200)).body as ApplicationView;
}

/** Sends it with the version that the application has now. */
export async function act(
  desk: FixtureDesk,
  person: FixturePerson,
  publicId: string,
  what: { method?: 'post' | 'put'; path: string; body?: object },
) {
  const { version } = await getRow(desk.deps.db, publicId);
  const { method = 'post', path, body = {} } = what;
  return desk.as[person].send(method, `/api/applications/${publicId}/${path}`, { version, ...body });
}

/** Handed in, its preliminary run finished, confirmed complete: in the queue, with an official run that waits. */
export async function makeConfirmed(desk: FixtureDesk): Promise<{ publicId: string; runId: string }> {
  const { publicId, preliminaryRunId } = await handIn(desk.deps.db, desk.world, new Date());
  await finishRun(desk.deps.db, preliminaryRunId, makeFindings(), new Date());
  const answer = await act(desk, 'reviewer', publicId, { path: 'completeness' });
  expect(answer.status).toBe(200);
  return { publicId, runId: (answer.body as ApplicationView).run!.publicId };
}

/** What the worker does to a run that waits. */
export async function screen(desk: FixtureDesk, runId: string, findings: Finding[] = makeFindings()) {
  const run = await findRun(desk.deps.db, runId);
  await finishRun(desk.deps.db, run!.id, findings, new Date());
}

export async function makeDecidable(
  desk: FixtureDesk,
  findings: Finding[] = makeFindings(),
): Promise<{ publicId: string; runId: string }> {
  const confirmed = await makeConfirmed(desk);
  await screen(desk, confirmed.runId, findings);
  return confirmed;
}

export function decide(desk: FixtureDesk, publicId: string, runId: string, kind = 'approve') {
  return act(desk, 'reviewer', publicId, {
    path: 'decision',
    body: { kind, runId, reason: 'As the findings say.' },
  });
}
