import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { storeMessage } from '../../server/local/mailbox-store.ts';
import type { MessageRow } from '../../shared/schemas/mailbox.ts';
import { makeTestApp, readProblem, signInAs, type Browser, type TestApp } from '../support/test-app.ts';

function write(to: string, subject: string, html?: string): Buffer {
  const head = [
    'From: Desk <desk@desk.example>',
    `To: ${to}`,
    `Subject: ${subject}`,
    `Message-ID: <${subject}@x>`,
  ];
  const body = html === undefined ? ['', 'In plain words'] : ['Content-Type: text/html', '', html];
  return Buffer.from([...head, ...body].join('\r\n'));
}

let desk: TestApp;
let reviewer: Browser;
let applicant: Browser;
let ids: { plain: string; html: string; stranger: string; trick: string };

beforeAll(async () => {
  desk = await makeTestApp();
  const store = (raw: Buffer, second: number) =>
    storeMessage(desk.deps.config.mailboxDir, raw, new Date(Date.UTC(2026, 2, 2, 9, 0, second)));
  ids = {
    plain: await store(write('Ada Lund <Applicant@Desk.Example>', 'first'), 1),
    html: await store(write('applicant@desk.example', 'second', '<script>x</script><b>Good</b>'), 2),
    stranger: await store(write('stranger@desk.example', 'third'), 3),
    trick: await store(write('"applicant@desk.example" <stranger@desk.example>', 'fourth'), 4),
  };
  reviewer = await signInAs(desk.app, desk.people.reviewer);
  applicant = await signInAs(desk.app, desk.people.applicant);
});
afterAll(() => desk.stop());

describe('the mailbox', () => {
  it('shows staff every message, newest first', async () => {
    const { body } = await reviewer.get('/api/mailbox').expect(200);
    expect((body as MessageRow[]).map(({ subject }) => subject)).toEqual([
      'fourth',
      'third',
      'second',
      'first',
    ]);
    expect(body).toContainEqual({
      id: ids.html,
      receivedAt: '2026-03-02T09:00:02.000Z',
      from: '"Desk" <desk@desk.example>',
      to: 'applicant@desk.example',
      subject: 'second',
      messageId: '<second@x>',
    });
  });

  it('shows applicants what came to their own address, whatever name stands beside another’s', async () => {
    const { body } = await applicant.get('/api/mailbox').expect(200);
    expect((body as MessageRow[]).map(({ id }) => id)).toEqual([ids.html, ids.plain]);
    for (const path of ['', '/html']) {
      await applicant.get(`/api/mailbox/${ids.stranger}${path}`).expect(404);
      await applicant.get(`/api/mailbox/${ids.trick}${path}`).expect(404);
    }
  });

  it('gives a message as text and says whether there is HTML', async () => {
    expect((await applicant.get(`/api/mailbox/${ids.plain}`).expect(200)).body).toMatchObject({
      subject: 'first',
      text: 'In plain words',
      hasHtml: false,
    });
    const withHtml = await applicant.get(`/api/mailbox/${ids.html}`).expect(200);
    expect(withHtml.body).toMatchObject({ hasHtml: true });
    expect(withHtml.body).not.toHaveProperty('html');
  });

  it('gives the HTML only under a policy in which nothing runs, loads or reads, for a frame of ours', async () => {
    const answer = await applicant.get(`/api/mailbox/${ids.html}/html`).expect(200);
    expect(answer.type).toBe('text/html');
    expect(answer.text).toContain('<b>Good</b>');
    expect(answer.headers['content-security-policy']).toBe(
      "default-src 'none'; style-src 'unsafe-inline'; img-src data:; frame-ancestors 'self'; sandbox",
    );
    expect(answer.headers['x-frame-options']).toBe('SAMEORIGIN');
    expect(readProblem(await applicant.get(`/api/mailbox/${ids.plain}/html`)).status).toBe(404);
  });

  it('has no message whose name is a path', async () => {
    expect(readProblem(await reviewer.get('/api/mailbox/..%2F..%2Fetc%2Fpasswd')).status).toBe(404);
  });

  it('is not there outside a demo', async () => {
    const browser = await signInAs(desk.another({ demo: false }), desk.people.reviewer);
    for (const path of ['', `/${ids.plain}`, `/${ids.html}/html`]) {
      expect(readProblem(await browser.get(`/api/mailbox${path}`)).status).toBe(404);
    }
  });
});
