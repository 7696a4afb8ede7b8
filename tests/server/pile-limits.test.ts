import { readdir } from 'node:fs/promises';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { insertFile } from '../../db/repositories/files.ts';
import { newPublicId } from '../../server/services/public-ids.ts';
import { makeTestApp, readProblem, signInAs, type Browser, type TestApp } from '../support/test-app.ts';

const pdf = Buffer.from('%PDF-1.7\n1 0 obj <<>> endobj\ntrailer <<>>\n%%EOF\n');
const megabyte = 1024 * 1024;

let desk: TestApp;
beforeAll(async () => {
  desk = await makeTestApp();
});
afterAll(() => desk.stop());

const upload = (browser: Browser) => browser.send('post', '/api/files').attach('file', pdf, 'plan.pdf');

async function pileUp(count: number, sizeBytes: number): Promise<void> {
  const { organisationId, id: uploadedBy } = desk.people.applicant;
  for (let index = 0; index < count; index += 1) {
    const publicId = newPublicId();
    await insertFile(desk.deps.db, {
      publicId,
      organisationId: organisationId as number,
      sha256: Buffer.alloc(32),
      path: publicId,
      sizeBytes,
      mediaType: 'application/pdf',
      originalName: 'plan.pdf',
      uploadedBy,
      uploadedAt: new Date(),
    });
  }
}

async function countKept(): Promise<number> {
  const entries = await readdir(join(desk.deps.config.filesDir, 'uploads'), {
    recursive: true,
    withFileTypes: true,
  });
  return entries.filter((entry) => entry.isFile()).length;
}

describe('a person who uploads without end', () => {
  it('is refused in words from 200 files on that nobody handed in, and what is refused is not kept', async () => {
    const applicant = await signInAs(desk.another(), desk.people.applicant);
    await pileUp(199, 1000);
    await upload(applicant).expect(201);
    const kept = await countKept();
    const problem = readProblem(await upload(applicant).expect(422));
    expect(problem.title).toContain('200 files or 500 MB that are not handed in yet');
    expect(problem.errors).toEqual([{ path: 'file', message: problem.title }]);
    expect(await countKept()).toBe(kept);
    expect(await readdir(join(desk.deps.config.filesDir, 'incoming'))).toEqual([]);
    // Another organisation has its own room.
    await upload(await signInAs(desk.another(), desk.people.stranger)).expect(201);
  });

  it('is refused from 500 MB on, however few files they are', async () => {
    await desk.deps.db('files').delete();
    await pileUp(25, 20 * megabyte);
    const applicant = await signInAs(desk.another(), desk.people.applicant);
    expect(readProblem(await upload(applicant).expect(422)).code).toBe('too-many-files');
    await desk.deps.db('files').limit(1).delete();
    await upload(applicant).expect(201);
  });

  it('has to wait after thirty files in a minute', async () => {
    await desk.deps.db('files').delete();
    const applicant = await signInAs(desk.another(), desk.people.applicant);
    for (let file = 0; file < 30; file += 1) await upload(applicant).expect(201);
    const answer = await upload(applicant).expect(429);
    expect(Number(answer.headers['retry-after'])).toBeGreaterThan(0);
  });
});

describe('a person who starts applications without end', () => {
  const start = (browser: Browser) => browser.send('post', '/api/applications', {});

  it('is refused in words once the organisation has 100 drafts open, also when two start the last at once', async () => {
    const { organisationId, id: createdBy } = desk.people.applicant;
    const now = new Date();
    const rows = Array.from({ length: 99 }, () => ({
      public_id: newPublicId(),
      organisation_id: organisationId,
      created_by: createdBy,
      stage: 'draft',
      waiting_on: 'applicant',
      created_at: now,
      updated_at: now,
    }));
    await desk.deps.db('applications').insert(rows);
    const applicant = await signInAs(desk.another(), desk.people.applicant);
    const answers = await Promise.all([start(applicant), start(applicant)]);
    expect(answers.map(({ status }) => status).sort()).toEqual([201, 422]);
    expect(readProblem(answers.find(({ status }) => status === 422)!).title).toBe(
      'Your organisation has 100 drafts open: submit or discard one before you start another',
    );
    await desk.deps.db('applications').where({ public_id: rows[0]!.public_id }).delete();
    await start(applicant).expect(201);
  });

  it('has to wait after thirty in a minute', async () => {
    const stranger = await signInAs(desk.another(), desk.people.stranger);
    for (let draft = 0; draft < 30; draft += 1) await start(stranger).expect(201);
    await start(stranger).expect(429);
  });
});
