import { Type } from '@sinclair/typebox';
import request from 'supertest';
import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest';
import { conflict, refused } from '../../server/errors.ts';
import { route } from '../../server/route-definition.ts';
import { allRoutes } from '../../server/routes/table.ts';
import {
  makeTestApp,
  password,
  readProblem,
  signInAs,
  type Browser,
  type TestApp,
} from '../support/test-app.ts';

const lines: string[] = [];
const secret = 'a-value-nobody-may-read';

/** Routes that fail in each way; the rule of session.read lets everybody in. */
const failing = [
  route({
    method: 'get',
    path: '/failing/fault',
    action: 'session.read',
    handle: () => Promise.reject(Object.assign(new Error('the reactor is loose'), { sql: secret })),
  }),
  route({
    method: 'get',
    path: '/failing/statement',
    action: 'session.read',
    handle: ({ deps }) => deps.db('no_such_table').where({ name: secret }).select(),
  }),
  route({
    method: 'get',
    path: '/failing/conflict',
    action: 'session.read',
    handle() {
      throw conflict('version-conflict', 'Ada changed it a minute ago');
    },
  }),
  route({
    method: 'get',
    path: '/failing/rule',
    action: 'session.read',
    handle: () =>
      Promise.reject(refused('findings-open', 'Two findings are open', [{ path: 'kind', message: 'x' }])),
  }),
  route({
    method: 'get',
    path: '/failing/midway',
    action: 'session.read',
    handle({ response }) {
      response.type('text/plain').write('begun');
      throw new Error('broke off');
    },
  }),
  route({
    method: 'post',
    path: '/failing/echo',
    action: 'session.read',
    body: Type.Object({ text: Type.String() }),
    status: 201,
    handle: ({ body }) => body,
  }),
  route({ method: 'delete', path: '/failing/echo', action: 'session.read', handle: () => undefined }),
];

let desk: TestApp;
let browser: Browser;
beforeAll(async () => {
  const logTo = { write: (line: string) => void lines.push(line) };
  desk = await makeTestApp({ routes: [...allRoutes, ...failing], logTo });
  browser = await signInAs(desk.app, desk.people.reviewer);
});
afterAll(() => desk.stop());
beforeEach(() => {
  lines.length = 0;
});

describe('a refusal', () => {
  it('is problem+json with title, status, code, fields and the id of the request, and is not kept', async () => {
    const answer = await request(desk.app).get('/api/people');
    expect(answer.status).toBe(401);
    expect(readProblem(answer)).toEqual({
      title: 'Sign in to go on',
      status: 401,
      code: 'not-signed-in',
      errors: [],
      requestId: answer.headers['x-request-id'],
    });
    expect(answer.headers['cache-control']).toBe('no-store');
  });

  it('carries the status, code, words and fields that the service gave it', async () => {
    expect(readProblem(await browser.get('/api/failing/conflict'))).toMatchObject({
      status: 409,
      code: 'version-conflict',
      title: 'Ada changed it a minute ago',
    });
    expect(readProblem(await browser.get('/api/failing/rule'))).toMatchObject({
      status: 422,
      code: 'findings-open',
      errors: [{ path: 'kind', message: 'x' }],
    });
  });

  it('of an address that is not there is a 404, with any method', async () => {
    for (const method of ['get', 'post', 'put', 'delete'] as const) {
      const answer = await browser.agent[method]('/api/no/such/thing');
      expect(readProblem(answer)).toMatchObject({ status: 404, code: 'not-found' });
    }
  });

  it('of an address that cannot be read is a 400', async () => {
    expect(readProblem(await browser.get('/api/mailbox/%E0%A4%A'))).toMatchObject({
      status: 400,
      code: 'malformed-address',
    });
  });
});

describe('a body', () => {
  const post = () => browser.send('post', '/api/failing/echo').set('content-type', 'application/json');

  it('that fits is answered with the status of the route', async () => {
    expect((await post().send({ text: 'hear' }).expect(201)).body).toEqual({ text: 'hear' });
    await browser.send('delete', '/api/failing/echo').expect(204, '');
  });

  it('that is not JSON is a 400 that does not repeat it', async () => {
    const answer = await post().send(`{"text": ${secret}`);
    expect(readProblem(answer)).toMatchObject({ status: 400, code: 'malformed-json' });
    expect(answer.text).not.toContain(secret);
  });

  it('over one megabyte is a 413, just under it is read', async () => {
    const text = 'x'.repeat(1024 * 1024 - 20);
    await post().send({ text }).expect(201);
    const answer = await post().send({ text: `${text}${'x'.repeat(40)}` });
    expect(readProblem(answer)).toMatchObject({ status: 413, code: 'too-large' });
  });

  it('of another kind, encoding or character set is a 415', async () => {
    const form = await browser.send('post', '/api/failing/echo').type('form').send({ text: 'a' });
    const encoded = await post().set('content-encoding', 'zip').send('{}');
    const charset = await post().set('content-type', 'application/json; charset=koi8-r').send('{}');
    for (const answer of [form, encoded, charset]) {
      expect(readProblem(answer)).toMatchObject({ status: 415, code: 'wrong-kind' });
    }
  });

  it('that is missing or has the wrong fields is a 400', async () => {
    expect(readProblem(await browser.send('post', '/api/failing/echo'))).toMatchObject({
      status: 400,
      code: 'invalid',
      errors: [{ path: '', message: 'Give the fields that belong here' }],
    });
    expect(readProblem(await post().send({ text: 5 })).errors).toEqual([
      { path: 'text', message: 'Give a text' },
    ]);
  });
});

describe('a fault of ours', () => {
  it('is a 500 without details, and logged with the id of the request', async () => {
    const answer = await browser.get('/api/failing/fault');
    const problem = readProblem(answer);
    expect(problem).toMatchObject({ status: 500, code: 'fault', errors: [] });
    expect(answer.text).not.toContain('reactor');
    const logged = lines.find((line) => line.includes('the reactor is loose')) ?? '';
    expect(JSON.parse(logged)).toMatchObject({ level: 50, req: { id: problem.requestId } });
  });

  it('in the database is logged without the values of the statement', async () => {
    await browser.get('/api/failing/fault');
    await browser.get('/api/failing/statement').expect(500);
    expect(lines.join()).toContain('no_such_table');
    expect(lines.join()).not.toContain(secret);
  });

  it('in the middle of an answer breaks the connection off', async () => {
    await expect(browser.get('/api/failing/midway')).rejects.toThrow();
    expect(lines.join()).toContain('broke off');
  });
});

describe('the log', () => {
  it('has one line a request and no password, cookie or token', async () => {
    const answer = await browser.signIn(desk.people.planner.email);
    await browser.signIn(desk.people.planner.email, `${password}!`);
    expect(lines.filter((line) => line.includes('"/api/session"'))).toHaveLength(2);
    const cookies = answer.headers['set-cookie'] as unknown as string[];
    const cookie = decodeURIComponent(cookies.find((one) => one.startsWith('feederwright.session')) ?? '');
    const id = /s:([^.]+)/.exec(cookie)?.[1] as string;
    for (const kept of [password, id, browser.csrfToken]) expect(lines.join()).not.toContain(kept);
  });

  it('does not believe a request id from outside', async () => {
    const answer = await request(desk.app).get('/api/session').set('x-request-id', 'mine');
    expect(answer.headers['x-request-id']).toMatch(/^[0-9a-f-]{36}$/);
  });
});
