import { createHash } from 'node:crypto';
import { readFileSync } from 'node:fs';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { getRuleSetVersion } from '../../db/repositories/rule-sets.ts';
import { findRun } from '../../db/repositories/runs.ts';
import type { Basis } from '../../server/services/bases.ts';
import type { Sheet } from '../../shared/schemas/sheets.ts';
import { computeStudy } from '../../workers/compute-study.ts';
import { finishRun, handIn } from '../support/fixture-applications.ts';
import { makeFixtureDesk, see, type FixtureDesk } from '../support/fixture-desk.ts';
import { readProblem } from '../support/test-app.ts';

let desk: FixtureDesk;
beforeAll(async () => {
  desk = await makeFixtureDesk();
});
afterAll(() => desk.stop());

const study = readFileSync(
  join(import.meta.dirname, '..', '..', 'fixtures', 'cases', 'marrow-lane', 'case.json'),
);

/** A finished run of Marrow Lane; `change` spoils the result that is kept of it. */
async function makeRun(change = ''): Promise<string> {
  const { publicId, preliminaryRunId } = await handIn(desk.deps.db, desk.world, new Date());
  const runId = (await see(desk.as.reviewer, publicId)).run!.publicId;
  const { basis } = (await findRun(desk.deps.db, runId))!;
  const { ruleSetVersionId } = JSON.parse(basis) as Basis;
  const { content } = await getRuleSetVersion(desk.deps.db, ruleSetVersionId);
  const answer = computeStudy(study, content);
  if (answer.kind !== 'computed') throw new Error('Expected a result.');
  const result = Buffer.concat([answer.resultBytes, Buffer.from(change)]);
  await finishRun(desk.deps.db, preliminaryRunId, answer.findings, new Date(), { study, result });
  return runId;
}

const readSheet = async (runId: string) =>
  (await desk.as.reviewer.get(`/api/runs/${runId}/sheet`).expect(200)).body as Sheet;

describe('The working sheet of a run', () => {
  it('comes from the very study that the run computed, and names both hashes', async () => {
    const sheet = await readSheet(await makeRun());
    expect(sheet.study).toMatch(/Marrow/);
    expect(sheet.origin.studySha256).toBe(createHash('sha256').update(study).digest('hex'));
    expect(sheet.origin.reference).toMatch(/-\d+$/);
    expect(sheet.warnings.join()).not.toContain('has changed since');
    expect(
      sheet.networks.find(({ state, sequence }) => state === 'none' && sequence === 'positive')!.z,
    ).toEqual({
      re: expect.closeTo(0, 9) as number,
      im: expect.closeTo(0.11, 9) as number,
    });
  });

  it('says so when the engine gives another result now than the run has', async () => {
    const { warnings } = await readSheet(await makeRun('\n'));
    expect(warnings[0]).toContain('The engine has changed since this run');
  });

  it('is saved as a PDF, the same bytes each time, on one of two papers', async () => {
    const path = `/api/runs/${await makeRun()}/sheet.pdf`;
    const save = (paper: string) => desk.as.reviewer.get(`${path}?paper=${paper}`).buffer(true);
    const [once, again] = [await save('a4').expect(200), await save('a4').expect(200)];
    expect(once.headers['content-type']).toBe('application/pdf');
    expect(once.headers['content-disposition']).toMatch(/^attachment; filename="working-sheet-[\w-]+\.pdf"$/);
    expect((once.body as Buffer).subarray(0, 5).toString()).toBe('%PDF-');
    expect((once.body as Buffer).equals(again.body as Buffer)).toBe(true);
    await save('a3').expect(400);
  });

  it('is for staff, for runs that have ended, and for studies that can be read', async () => {
    const runId = await makeRun();
    for (const path of [`/api/runs/${runId}/sheet`, `/api/runs/${runId}/sheet.pdf`]) {
      await desk.as.applicant.get(path).expect(403);
    }
    const { publicId, preliminaryRunId } = await handIn(desk.deps.db, desk.world, new Date());
    const waiting = (await see(desk.as.reviewer, publicId)).run!.publicId;
    await desk.as.reviewer.get(`/api/runs/${waiting}/sheet`).expect(404);
    await finishRun(desk.deps.db, preliminaryRunId, [], new Date());
    const problem = readProblem(await desk.as.reviewer.get(`/api/runs/${waiting}/sheet`).expect(409));
    expect(problem.code).toBe('study-refused');
  });
});
