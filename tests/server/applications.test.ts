import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import type { ApplicationView, Worklist } from '../../shared/schemas/applications.ts';
import { biogasAnswers, rooftopAnswers, solarAnswers } from '../support/fixture-answers.ts';
import { fillDraft, handIn } from '../support/fixture-handing-in.ts';
import { makeFixtureWorld, type FixtureWorld } from '../support/fixture-world.ts';
import { makeTestApp, signInAs, type Browser, type TestApp } from '../support/test-app.ts';

let desk: TestApp;
let world: FixtureWorld;
let applicant: Browser;
let rival: Browser;
let reviewer: Browser;
let solar: ApplicationView;
let biogas: ApplicationView;
let rooftop: ApplicationView;

beforeAll(async () => {
  desk = await makeTestApp();
  world = await makeFixtureWorld(desk.deps.db);
  applicant = await signInAs(desk.app, world.people.applicant);
  rival = await signInAs(desk.app, world.people.rival);
  reviewer = await signInAs(desk.app, world.people.reviewer);
  solar = await handIn(applicant, solarAnswers());
  biogas = await handIn(rival, biogasAnswers());
  rooftop = await handIn(applicant, rooftopAnswers());
  await fillDraft(applicant, { project: { ...solarAnswers().project, name: 'Unfinished' } });
  const take = { version: solar.version, reviewer: 'me' };
  await reviewer.send('put', `/api/applications/${solar.publicId}/reviewer`, take).expect(200);
  await desk.deps
    .db('applications')
    .where({ public_id: biogas.publicId })
    .update({ outside_count: 2, needs_data_count: 1, next_due_on: '2026-01-09' });
  await desk.deps.db('applications').where({ public_id: rooftop.publicId }).update({ outside_count: 0 });
});
afterAll(() => desk.stop());

async function list(browser: Browser, query = ''): Promise<Worklist> {
  return (await browser.get(`/api/applications${query}`).expect(200)).body as Worklist;
}

const names = ({ rows }: Worklist) => rows.map(({ name }) => name);

describe('the worklist', () => {
  it('of staff has everything that was handed in and no draft, the newest first', async () => {
    const found = await list(reviewer);
    expect(names(found)).toEqual(['Fellow house roof', 'Oxmere biogas', 'Saltwick barn roofs']);
    expect(found).toMatchObject({ total: 3, overdue: 1, page: 1, pageSize: 20 });
    expect(found.rows[2]).toMatchObject({
      reference: solar.reference,
      organisation: 'Saltwick Solar',
      circuit: 'FX-1',
      kind: 'pv-inverter',
      sizeKw: 1000,
      reviewer: { name: 'Mira Holt' },
      clock: { kind: 'completeness' },
    });
    expect(found.rows[1]).toMatchObject({ outsideCount: 2, needsDataCount: 1 });
  });

  it('of an applicant has their organisation’s, drafts too, and says nothing of reviewers or unreleased findings', async () => {
    const found = await list(applicant);
    expect(names(found)).toEqual(['Fellow house roof', 'Saltwick barn roofs', 'Unfinished']);
    for (const row of found.rows) {
      expect(row).toMatchObject({ organisation: 'Saltwick Solar', reviewer: null, outsideCount: null });
    }
    expect(names(await list(rival))).toEqual(['Oxmere biogas']);
  });

  it('does not let an applicant ask who reviews or what was found by filtering', async () => {
    expect((await list(applicant, '?assigned=mine')).total).toBe(3);
    expect((await list(applicant, '?outside=true')).total).toBe(3);
    expect((await list(rival, '?search=Saltwick')).total).toBe(0);
  });

  it('comes in pages that neither repeat nor leave out', async () => {
    const pages = [await list(reviewer, '?pageSize=2'), await list(reviewer, '?pageSize=2&page=2')];
    expect(pages.map((page) => page.total)).toEqual([3, 3]);
    expect(pages.flatMap(names)).toEqual(['Fellow house roof', 'Oxmere biogas', 'Saltwick barn roofs']);
    await reviewer.get('/api/applications?page=0').expect(400);
    await reviewer.get('/api/applications?pageSize=101').expect(400);
  });

  it('sorts by what is asked, with what has no value last both ways', async () => {
    expect(names(await list(reviewer, '?sort=size&direction=asc'))).toEqual([
      'Fellow house roof',
      'Saltwick barn roofs',
      'Oxmere biogas',
    ]);
    expect(names(await list(reviewer, '?sort=due&direction=asc'))[0]).toBe('Oxmere biogas');
    for (const direction of ['asc', 'desc']) {
      const sorted = names(await list(reviewer, `?sort=outside&direction=${direction}`));
      expect(sorted[2]).toBe('Saltwick barn roofs');
    }
    await reviewer.get('/api/applications?sort=secret').expect(400);
  });

  it('filters by stage, reviewer and findings, and searches names, places and references', async () => {
    expect((await list(reviewer, '?stage=initial-review')).total).toBe(0);
    expect((await list(reviewer, '?stage=draft')).total).toBe(0);
    expect(names(await list(reviewer, '?assigned=mine'))).toEqual(['Saltwick barn roofs']);
    expect((await list(reviewer, '?assigned=unassigned')).total).toBe(2);
    expect(names(await list(reviewer, '?outside=true'))).toEqual(['Oxmere biogas']);
    expect(names(await list(reviewer, '?search=biogas%20tarnside'))).toEqual(['Oxmere biogas']);
    expect(names(await list(reviewer, '?search=lateral'))).toEqual(['Fellow house roof']);
    expect(names(await list(reviewer, `?search=${rooftop.reference}`))).toEqual(['Fellow house roof']);
    expect((await list(reviewer, '?search=%25')).total).toBe(0);
  });
});

describe('the page of an application', () => {
  const read = async (browser: Browser, publicId: string) =>
    (await browser.get(`/api/applications/${publicId}`).expect(200)).body as ApplicationView;

  it('tells staff where it connects and who did what', async () => {
    const view = await read(reviewer, solar.publicId);
    expect(view.poi).toEqual({
      modelCode: 'FX',
      node: 'n2',
      circuit: 'FX-1',
      kv: 12.47,
      lat: 42.02,
      lng: -31,
    });
    expect(view.allowed).toContain('confirm-complete');
    expect(view.events.at(-1)).toMatchObject({ event: 'submit', actor: 'Ada Brenn' });
  });

  it('tells an applicant nothing of the network, and reads “the utility” for its people', async () => {
    const items = [{ section: 'papers', text: 'The one-line diagram is missing.' }];
    const { version } = await read(reviewer, rooftop.publicId);
    const path = `/api/applications/${rooftop.publicId}/deficiency`;
    await reviewer.send('post', path, { version, items }).expect(200);
    const answer = await applicant.get(`/api/applications/${rooftop.publicId}`).expect(200);
    const view = answer.body as ApplicationView;
    expect(view).toMatchObject({ poi: null, reviewer: null, allowed: expect.arrayContaining(['withdraw']) });
    expect(view.events.at(-1)).toMatchObject({ event: 'ask-for-missing', actor: 'the utility' });
    expect(view.requests[0]).toMatchObject({ askedBy: 'the utility' });
    expect(view.run).toMatchObject({ basis: null, summary: null, stale: null });
    expect(answer.text).not.toContain('Mira Holt');
    expect(answer.text).not.toMatch(/"n4"|"n2"|cb1/);
  });

  it('is not there for another organisation', async () => {
    await rival.get(`/api/applications/${solar.publicId}`).expect(404);
    await applicant.get(`/api/applications/${biogas.publicId}`).expect(404);
    await reviewer.get('/api/applications/AAAAAAAAAAAAAAAAAAAAAA').expect(404);
  });
});
