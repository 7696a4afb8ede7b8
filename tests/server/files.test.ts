import { mkdir, readdir, readFile, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { removeOrphanFiles } from '../../server/services/files.ts';
import { findNameProblem } from '../../server/services/file-names.ts';
import { largestFileBytes, type FileView } from '../../shared/schemas/files.ts';
import { solarAnswers } from '../support/fixture-answers.ts';
import { handIn } from '../support/fixture-handing-in.ts';
import { makeFixtureWorld, type FixtureWorld } from '../support/fixture-world.ts';
import { makeTestApp, readProblem, signInAs, type Browser, type TestApp } from '../support/test-app.ts';

const pdf = Buffer.from('%PDF-1.7\n1 0 obj <<>> endobj\ntrailer <<>>\n%%EOF\n');
/** The signature of a PNG, its header chunk (one grey pixel) and its end. */
const png = Buffer.from(
  '89504e470d0a1a0a0000000d49484452000000010000000108000000003a7e9b550000000a49444154789c63000100000500010d0a2db4' +
    '0000000049454e44ae426082',
  'hex',
);

let desk: TestApp;
let world: FixtureWorld;
let applicant: Browser;
let rival: Browser;
let reviewer: Browser;

beforeAll(async () => {
  desk = await makeTestApp();
  world = await makeFixtureWorld(desk.deps.db);
  applicant = await signInAs(desk.app, world.people.applicant);
  rival = await signInAs(desk.app, world.people.rival);
  reviewer = await signInAs(desk.app, world.people.reviewer);
});
afterAll(() => desk.stop());

/** `filepath`, because the form writer cuts folders off a `filename`. */
function upload(browser: Browser, name: string, bytes: Buffer) {
  const named = { filepath: name } as unknown as { filename: string };
  return browser.send('post', '/api/files').attach('file', bytes, named);
}

async function uploadWell(browser: Browser, name: string, bytes = pdf): Promise<FileView> {
  return (await upload(browser, name, bytes).expect(201)).body as FileView;
}

async function listArrivals(): Promise<string[]> {
  return readdir(join(desk.deps.config.filesDir, 'incoming'));
}

describe('an upload', () => {
  it('is kept under a random name and comes back byte for byte, as an attachment that can do nothing', async () => {
    const name = 'Lageplan Süd „neu“ 図.pdf';
    const file = await uploadWell(applicant, name);
    expect(file).toMatchObject({ name, mediaType: 'application/pdf', sizeBytes: pdf.length });
    const answer = await applicant.get(`/api/files/${file.publicId}`).buffer(true).expect(200);
    expect(answer.body).toEqual(pdf);
    expect(answer.headers).toMatchObject({
      'content-type': 'application/pdf',
      'content-security-policy': "default-src 'none'; sandbox",
      'x-content-type-options': 'nosniff',
    });
    const disposition = String(answer.headers['content-disposition']);
    expect(disposition).toMatch(/^attachment; filename="[\x20-\x7e]+"; filename\*=UTF-8''/);
    expect(decodeURIComponent(disposition.split("filename*=UTF-8''")[1] ?? '')).toBe(name);
    const [row] = await desk.deps.db('files').where({ public_id: file.publicId }).select('path');
    const path = (row as { path: string }).path;
    expect(path).toMatch(/^uploads\/[\w-]{2}\/[\w-]{22}$/);
    expect(await readFile(join(desk.deps.config.filesDir, path))).toEqual(pdf);
    expect(await listArrivals()).toEqual([]);
  });

  it('of a PNG named .pdf is refused with what the name says and what the content is', async () => {
    const problem = readProblem(await upload(applicant, 'plan.pdf', png));
    const message = 'The name says that the file is a PDF (.pdf), but its content is a PNG image';
    expect(problem).toMatchObject({ status: 415, title: message, errors: [{ path: 'file', message }] });
    expect(await uploadWell(applicant, 'plan.png', png)).toMatchObject({ mediaType: 'image/png' });
  });

  it('of something else is refused by its name, or by its content', async () => {
    const named = readProblem(await upload(applicant, 'plan.docx', pdf));
    expect(named.title).toBe('Files must be PDF, PNG or JPEG (.pdf, .png, .jpg): the name ends in .docx');
    const disguised = readProblem(await upload(applicant, 'photo.jpg', Buffer.from('just words')));
    expect(disguised).toMatchObject({
      status: 415,
      title:
        'The name says that the file is a JPEG image (.jpg), but its content is neither a PDF nor a PNG or JPEG image',
    });
  });

  it('of 21 MB is refused with the limit and leaves nothing behind, while 20 MB are taken', async () => {
    const tooLarge = Buffer.concat([pdf, Buffer.alloc(21 * 1024 * 1024 - pdf.length)]);
    const problem = readProblem(await upload(applicant, 'big.pdf', tooLarge));
    expect(problem).toMatchObject({ status: 413, title: 'The file is larger than 20 MB' });
    expect(await listArrivals()).toEqual([]);
    const largest = Buffer.concat([pdf, Buffer.alloc(largestFileBytes - pdf.length)]);
    expect(await uploadWell(applicant, 'big.pdf', largest)).toMatchObject({ sizeBytes: largestFileBytes });
  });

  it('with a folder in its name is refused instead of being cut to its last part', async () => {
    for (const name of ['../plan.pdf', '../../etc/plan.pdf', 'plans\\plan.pdf']) {
      const problem = readProblem(await upload(applicant, name, pdf));
      expect(problem.status).toBe(400);
      expect(problem.title).toBe(
        'The file name must not hold a folder (/, \\ or ../); rename the file and choose it again',
      );
    }
  });

  it('that is empty, that is missing, or that has an unreadable name is refused', async () => {
    const empty = readProblem(await upload(applicant, 'plan.pdf', Buffer.alloc(0)));
    expect(empty).toMatchObject({ status: 400, title: 'The file is empty; choose one that holds something' });
    const none = readProblem(await applicant.send('post', '/api/files').expect(400));
    expect(none.title).toBe('Choose a file');
    expect(findNameProblem('plan\u0007.pdf')).toContain('cannot be shown');
    expect(findNameProblem('plan\u202efdp.exe')).toContain('cannot be shown');
    expect(findNameProblem(`${'a'.repeat(252)}.pdf`)).toBe(
      'The file name must be 255 characters or fewer: got 256',
    );
    expect(await listArrivals()).toEqual([]);
  });

  it('in a form that cannot be read, or that holds more than the file, is refused without a fault', async () => {
    const broken = applicant
      .send('post', '/api/files')
      .set('content-type', 'multipart/form-data; boundary=x');
    expect(readProblem(await broken.send('--x\r\nnonsense'))).toMatchObject({ status: 400, code: 'form' });
    const more = applicant.send('post', '/api/files').field('note', 'hello').attach('file', pdf, 'plan.pdf');
    expect(readProblem(await more)).toMatchObject({ status: 400, code: 'form' });
    const other = applicant.send('post', '/api/files').attach('paper', pdf, 'plan.pdf');
    expect(readProblem(await other)).toMatchObject({ status: 400, code: 'unexpected-file' });
    expect(await listArrivals()).toEqual([]);
  });

  it('can be read by its organisation, by the utility once it is handed in, and is not there for others', async () => {
    const { publicId } = await uploadWell(applicant, 'plan.pdf');
    await applicant.get(`/api/files/${publicId}`).expect(200);
    await reviewer.get(`/api/files/${publicId}`).expect(404);
    const answers = solarAnswers();
    answers.papers.files = [{ fileId: publicId, purpose: 'site-plan' }];
    await handIn(applicant, answers);
    await reviewer.get(`/api/files/${publicId}`).expect(200);
    await rival.get(`/api/files/${publicId}`).expect(404);
    await upload(reviewer, 'plan.pdf', pdf).expect(403);
  });
});

describe('the sweep of files', () => {
  it('removes after a day what was broken off, what has no row and what nothing names, and keeps the rest', async () => {
    const { filesDir } = desk.deps.config;
    const unused = await uploadWell(applicant, 'unused.pdf');
    const used = await uploadWell(applicant, 'used.pdf');
    const answers = solarAnswers();
    answers.papers.files = [{ fileId: used.publicId, purpose: 'site-plan' }];
    await handIn(applicant, answers);
    const context = { actor: null, now: new Date(), ip: '127.0.0.1', requestId: 'sweep' };
    expect(await removeOrphanFiles(desk.deps, context)).toBe(0);
    await writeFile(join(filesDir, 'incoming', 'broken-off'), 'half');
    await mkdir(join(filesDir, 'uploads', 'zz'), { recursive: true });
    await writeFile(join(filesDir, 'uploads', 'zz', 'zz-without-row'), 'whole');
    const later = { ...context, now: new Date(Date.now() + 25 * 3_600_000) };
    expect(await removeOrphanFiles(desk.deps, later)).toBeGreaterThanOrEqual(3);
    expect(await listArrivals()).toEqual([]);
    await applicant.get(`/api/files/${unused.publicId}`).expect(404);
    await applicant.get(`/api/files/${used.publicId}`).expect(200);
    expect(await readdir(join(filesDir, 'uploads', 'zz'))).toEqual([]);
  });
});
