import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { listPreApplicationItems } from '../../shared/pre-application-words.ts';
import type { PreApplicationReport } from '../../shared/schemas/pre-application-reports.ts';
import { makeFixtureWorld } from '../support/fixture-world.ts';
import { readPdfText } from '../support/pdf-text.ts';
import { makeTestApp, readProblem, signInAs, type Browser, type TestApp } from '../support/test-app.ts';

let desk: TestApp;
let applicant: Browser;
let rival: Browser;
let reviewer: Browser;
const path = '/api/pre-application-reports';

beforeAll(async () => {
  desk = await makeTestApp();
  const { people } = await makeFixtureWorld(desk.deps.db);
  applicant = await signInAs(desk.app, people.applicant);
  rival = await signInAs(desk.app, people.rival);
  reviewer = await signInAs(desk.app, people.reviewer);
});
afterAll(() => desk.stop());

/** At n2 of the fixture's feeder. */
const place = { lat: 42.0203, lng: -31, phases: 'ABC' };

async function ask(): Promise<PreApplicationReport> {
  return (await applicant.send('post', path, place).expect(201)).body as PreApplicationReport;
}

describe('a pre-application report', () => {
  it('is computed on the network as it stands, and names no node or device of it', async () => {
    const report = await ask();
    expect(report).toMatchObject({ circuit: 'FX-1', substation: 'Fixture Head', figures: { kv: 12.47 } });
    expect(report.figures.threePhaseFaultA).toBeGreaterThan(0);
    const words = JSON.stringify(report);
    for (const name of ['"n2"', 'FX-CB', 'FX-R1']) expect(words).not.toContain(name);
  });

  it('is read by the organisation that asked and by the utility, by nobody else', async () => {
    const { publicId } = await ask();
    await applicant.get(`${path}/${publicId}`).expect(200);
    await reviewer.get(`${path}/${publicId}`).expect(200);
    await rival.get(`${path}/${publicId}`).expect(404);
    const listed = async (browser: Browser) =>
      ((await browser.get(path).expect(200)).body as PreApplicationReport[]).map((each) => each.publicId);
    expect(await listed(applicant)).toContain(publicId);
    expect(await listed(reviewer)).toContain(publicId);
    expect(await listed(rival)).toEqual([]);
  });

  it('is the same on paper as on the screen, on both sizes', async () => {
    const report = await ask();
    for (const [paper, height] of [
      ['a4', '841.89'],
      ['letter', '792'],
    ] as const) {
      const { body } = await applicant
        .get(`${path}/${report.publicId}/pdf?paper=${paper}`)
        .buffer(true)
        .parse((response, done) => {
          const chunks: Buffer[] = [];
          response.on('data', (chunk: Buffer) => chunks.push(chunk));
          response.on('end', () => done(null, Buffer.concat(chunks)));
        })
        .expect(200)
        .expect('content-type', 'application/pdf');
      expect((body as Buffer).toString('latin1')).toContain(height);
      const text = readPdfText(body as Buffer).replace(/\s+/g, '');
      const { groups } = listPreApplicationItems(report);
      for (const { label, value } of groups.flatMap(({ items }) => items)) {
        expect(text, label).toContain(value.replace(/\s+/g, ''));
      }
    }
  });

  it('is refused where no feeder is near, and for a place that is none, at the field', async () => {
    const far = await applicant.send('post', path, { ...place, lat: 10 }).expect(400);
    expect(readProblem(far).errors).toEqual([
      { path: 'lat', message: 'Nothing that can take a three-phase project is within 600 m of the pin' },
    ]);
    const none = await applicant.send('post', path, { phases: 'ABC' }).expect(400);
    expect(readProblem(none).errors.map((error) => error.path)).toEqual(
      expect.arrayContaining(['lat', 'lng']),
    );
    await reviewer.send('post', path, place).expect(403);
  });
});
