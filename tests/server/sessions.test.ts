import request from 'supertest';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { saveSetting } from '../../db/repositories/settings.ts';
import type { SessionView } from '../../shared/schemas/sessions.ts';
import { Browser, makeTestApp, password, readProblem, signInAs, type TestApp } from '../support/test-app.ts';

let desk: TestApp;
beforeAll(async () => {
  desk = await makeTestApp();
});
afterAll(() => desk.stop());

function readSessionCookie(answer: { headers: Record<string, unknown> }): string {
  const cookies = (answer.headers['set-cookie'] ?? []) as string[];
  return cookies.find((cookie) => cookie.startsWith('feederwright.session=')) ?? '';
}

describe('the session', () => {
  it('of somebody who has not signed in has a token, the utility and no person', async () => {
    const utility = {
      name: 'Marrowbank',
      territory: 'Tessaly Vale',
      timeZone: 'UTC',
      contactEmail: 'a@b.example',
    };
    await saveSetting(desk.deps.db, 'utility', { ...utility, referencePrefix: 'ML' });
    const session = await new Browser(desk.app).open();
    expect(session).toEqual({ user: null, csrfToken: session.csrfToken, demo: true, utility });
    expect(session.csrfToken).toMatch(/^[0-9a-f]{64}$/);
  });

  it('names the person and their organisation after signing in', async () => {
    const browser = await signInAs(desk.app, desk.people.applicant);
    const { user } = await browser.open();
    expect(user).toMatchObject({
      name: 'applicant',
      email: 'applicant@desk.example',
      role: 'applicant',
      organisation: { name: 'Harrow Sun Works' },
    });
  });

  it('takes the e-mail address in any case and with blanks around it', async () => {
    const answer = await new Browser(desk.app).signIn('  Reviewer@Desk.Example ');
    expect(answer.status).toBe(200);
    expect((answer.body as SessionView).user).toMatchObject({ role: 'reviewer', organisation: null });
  });

  it('is over after signing out', async () => {
    const browser = await signInAs(desk.app, desk.people.auditor);
    const answer = await browser.send('delete', '/api/session').expect(200);
    expect((answer.body as SessionView).user).toBeNull();
    expect((await browser.open()).user).toBeNull();
    await browser.get('/api/people').expect(401);
  });

  it('has a cookie that scripts cannot read and other sites cannot send, for twelve hours', async () => {
    const cookie = readSessionCookie(await request(desk.app).get('/api/session'));
    expect(cookie).toMatch(/; Path=\/; Expires=.*; HttpOnly; SameSite=Lax$/);
    const expires = new Date(/Expires=([^;]+)/.exec(cookie)?.[1] ?? '').getTime();
    expect(Math.abs(expires - Date.now() - 12 * 3_600_000)).toBeLessThan(60_000);
  });

  it('is marked secure where people reach the desk by https, and a proxy says so', async () => {
    const app = desk.another({ publicUrl: 'https://desk.example' });
    const answer = await request(app).get('/api/session').set('x-forwarded-proto', 'https');
    expect(readSessionCookie(answer)).toContain('; Secure');
    expect(answer.headers['strict-transport-security']).toContain('max-age=');
  });

  it('changes its id when somebody signs in, so that a planted one is worth nothing', async () => {
    const planted = readSessionCookie(await request(desk.app).get('/api/session')).split(';')[0] as string;
    const { body } = await request(desk.app).get('/api/session').set('cookie', planted);
    const answer = await request(desk.app)
      .post('/api/session')
      .set('cookie', planted)
      .set('x-csrf-token', (body as SessionView).csrfToken)
      .send({ email: desk.people.reviewer.email, password })
      .expect(200);
    const given = readSessionCookie(answer).split(';')[0] as string;
    expect(given).not.toBe('');
    expect(given).not.toBe(planted);
    expect((answer.body as SessionView).csrfToken).not.toBe((body as SessionView).csrfToken);
    const before = await request(desk.app).get('/api/session').set('cookie', planted);
    expect((before.body as SessionView).user).toBeNull();
    const after = await request(desk.app).get('/api/session').set('cookie', given);
    expect((after.body as SessionView).user).toMatchObject({ role: 'reviewer' });
  });

  it('ends when the account is closed, and a changed role counts at once', async () => {
    const browser = await signInAs(desk.app, desk.people.administrator);
    const { db } = desk.deps;
    await browser.get('/api/people').expect(200);
    await db('users').where({ id: desk.people.administrator.id }).update({ role: 'planner' });
    await browser.get('/api/people').expect(403);
    await db('users')
      .where({ id: desk.people.administrator.id })
      .update({ role: 'administrator', disabled_at: new Date() });
    await browser.get('/api/people').expect(401);
    await db('users').where({ id: desk.people.administrator.id }).update({ disabled_at: null });
    // The session was ended, not suspended.
    await browser.get('/api/people').expect(401);
  });
});

describe('signing in', () => {
  it('with a wrong password and with an unknown address reads the same', async () => {
    const wrong = await new Browser(desk.app).signIn(desk.people.reviewer.email, 'not it');
    const unknown = await new Browser(desk.app).signIn('nobody@desk.example', 'not it');
    for (const answer of [wrong, unknown]) {
      expect(answer.status).toBe(401);
      expect(readProblem(answer)).toMatchObject({
        code: 'sign-in-failed',
        title: 'E-mail address and password do not belong together',
      });
    }
  });

  it('to a closed account is refused, and only who knows the password hears why', async () => {
    const { email } = desk.people.closed;
    expect(readProblem(await new Browser(desk.app).signIn(email))).toMatchObject({
      status: 401,
      code: 'account-disabled',
    });
    expect(readProblem(await new Browser(desk.app).signIn(email, 'not it')).code).toBe('sign-in-failed');
  });

  it('without an address and a password asks for both, at their fields', async () => {
    const browser = new Browser(desk.app);
    await browser.open();
    const answer = await browser.send('post', '/api/session', {});
    expect(answer.status).toBe(400);
    expect(readProblem(answer).errors).toEqual([
      { path: 'email', message: 'Enter the e-mail address of your account' },
      { path: 'password', message: 'Enter your password' },
    ]);
  });
});

describe('the demo accounts', () => {
  const accounts = [{ role: 'reviewer', name: 'Ada', email: 'ada@desk.example', password: 'shown' }];

  it('are listed to everybody in a demo', async () => {
    await saveSetting(desk.deps.db, 'demo.accounts', accounts);
    await request(desk.app).get('/api/demo/accounts').expect(200, accounts);
  });

  it('are not there outside a demo', async () => {
    await request(desk.another({ demo: false }))
      .get('/api/demo/accounts')
      .expect(404);
  });
});
