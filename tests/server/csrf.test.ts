import request from 'supertest';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { allRoutes } from '../../server/routes/table.ts';
import { Browser, makeTestApp, readProblem, signInAs, type TestApp } from '../support/test-app.ts';

let desk: TestApp;
beforeAll(async () => {
  desk = await makeTestApp();
});
afterAll(() => desk.stop());

describe('a request that changes something', () => {
  it('without the token of the session is refused', async () => {
    const answer = await request(desk.app).post('/api/session').send({ email: 'a@b.example', password: 'x' });
    expect(answer.status).toBe(403);
    expect(readProblem(answer).code).toBe('csrf');
  });

  it('with the token of another session is refused', async () => {
    const mine = new Browser(desk.app);
    await mine.open();
    const other = new Browser(desk.app);
    await other.open();
    mine.csrfToken = other.csrfToken;
    expect(readProblem(await mine.send('delete', '/api/session'))).toMatchObject({
      status: 403,
      code: 'csrf',
    });
  });

  it('with the token from before signing in is refused', async () => {
    const browser = new Browser(desk.app);
    const { csrfToken: before } = await browser.open();
    await browser.signIn(desk.people.reviewer.email);
    browser.csrfToken = before;
    expect(readProblem(await browser.send('delete', '/api/session')).code).toBe('csrf');
  });

  it('is refused without the token on every route that is not a reading one', async () => {
    const changing = allRoutes.filter(({ method }) => method !== 'get');
    expect(changing.length).toBeGreaterThan(1);
    const browsers = [
      await signInAs(desk.app, desk.people.applicant),
      await signInAs(desk.app, desk.people.reviewer),
    ];
    for (const { method, path } of changing) {
      for (const browser of browsers) {
        browser.csrfToken = 'wrong';
        const answer = await browser.send(method as 'post', `/api${path.replace(/:\w+/g, 'x')}`, {});
        expect([403, 404], `${method} ${path}`).toContain(answer.status);
        if (answer.status === 403) expect(['csrf', 'not-allowed']).toContain(readProblem(answer).code);
      }
    }
  });
});

describe('a token in place of the session', () => {
  it('is refused on every route, even beside a good session', async () => {
    const browser = await signInAs(desk.app, desk.people.auditor);
    for (const { method, path } of allRoutes) {
      const answer = await browser.agent[method](`/api${path.replace(/:\w+/g, 'x')}`)
        .set('x-csrf-token', browser.csrfToken)
        .set('authorization', 'bearer 0123456789abcdef');
      expect(answer.status, `${method} ${path}`).toBe(401);
      expect(readProblem(answer).code).toBe('bearer-refused');
    }
  });
});
