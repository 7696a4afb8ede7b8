// @vitest-environment happy-dom
import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest';
import { ApiProblem, getJson, rememberToken, sendJson, whenSignedOut } from '../../../src/api/client.ts';
import type { SessionView } from '../../../shared/schemas/sessions.ts';

const session = (csrfToken: string, publicId = 'ana'): SessionView => ({
  user: { publicId, name: 'Ana Rell', email: 'ana@b.example', role: 'reviewer', organisation: null },
  csrfToken,
  demo: true,
  utility: { name: 'Marrowbank', territory: 'Vale', timeZone: 'UTC', contactEmail: 'a@b.example' },
});

const answer = (status: number, body: unknown) =>
  new Response(typeof body === 'string' ? body : JSON.stringify(body), { status });

let answers: (Response | Error)[];
let requests: { url: string; init: RequestInit }[];

beforeEach(() => {
  answers = [];
  requests = [];
  vi.stubGlobal('fetch', (url: string, init: RequestInit) => {
    requests.push({ url, init });
    const next = answers.shift();
    return next instanceof Error ? Promise.reject(next) : Promise.resolve(next);
  });
  rememberToken(session('first'));
});
afterEach(() => vi.unstubAllGlobals());

const tokenOf = (request: { init: RequestInit } | undefined) =>
  (request?.init.headers as Record<string, string>)['x-csrf-token'];

async function problemOf(work: Promise<unknown>): Promise<ApiProblem> {
  const fault: unknown = await work.then(
    () => undefined,
    (reason: unknown) => reason,
  );
  expect(fault).toBeInstanceOf(ApiProblem);
  return fault as ApiProblem;
}

describe('the client', () => {
  it('hands on status, code, words and field errors when the server answers with a problem', async () => {
    const errors = [{ path: 'units.0.count', message: 'Number of units must be between 1 and 500' }];
    answers = [
      answer(400, { title: 'Check the answers', status: 400, code: 'validation', errors, requestId: 'r1' }),
    ];
    const problem = await problemOf(sendJson('PUT', '/api/thing', {}));
    expect({ ...problem, message: problem.message }).toMatchObject({
      status: 400,
      code: 'validation',
      message: 'Check the answers',
      errors,
      requestId: 'r1',
    });
  });

  it('shows nothing of a foreign page when the answer is not a problem document', async () => {
    answers = [answer(502, '<html>Bad gateway at 10.0.0.7</html>')];
    const problem = await problemOf(getJson('/api/thing'));
    expect(problem).toMatchObject({ status: 502, code: 'unexpected-answer', errors: [] });
    expect(problem.message).toBe('Something went wrong on our side.');
  });

  it('says that the server could not be reached when there is no answer', async () => {
    answers = [new TypeError('Failed to fetch')];
    expect(await problemOf(getJson('/api/thing'))).toMatchObject({ status: 0, code: 'unreachable' });
  });

  it('leaves out what is not set when it writes a query', async () => {
    answers = [answer(200, [])];
    await getJson('/api/applications', { page: 2, stage: undefined, search: '', outside: false });
    expect(requests[0]?.url).toBe('/api/applications?page=2&outside=false');
  });

  it('tells the listener when nobody is signed in any more', async () => {
    const listener = vi.fn();
    whenSignedOut(listener);
    answers = [answer(401, { title: 'Sign in', status: 401, code: 'signed-out', errors: [] })];
    await problemOf(getJson('/api/thing'));
    expect(listener).toHaveBeenCalledOnce();
  });

  it('fetches a new token and sends again once when the token was stale', async () => {
    const stale = { title: 'Out of date', status: 403, code: 'csrf', errors: [] };
    answers = [answer(403, stale), answer(200, session('second')), answer(200, { done: true })];
    expect(await sendJson('POST', '/api/thing', { a: 1 })).toEqual({ done: true });
    expect(requests.map(({ url }) => url)).toEqual(['/api/thing', '/api/session', '/api/thing']);
    expect([tokenOf(requests[0]), tokenOf(requests[2])]).toEqual(['first', 'second']);
  });

  it('gives up when the new token is refused too', async () => {
    const stale = { title: 'Out of date', status: 403, code: 'csrf', errors: [] };
    answers = [answer(403, stale), answer(200, session('second')), answer(403, stale)];
    expect(await problemOf(sendJson('POST', '/api/thing'))).toMatchObject({ status: 403, code: 'csrf' });
    expect(requests).toHaveLength(3);
  });

  it('does not send in the name of another person who has signed in in this browser meanwhile', async () => {
    const stale = { title: 'Out of date', status: 403, code: 'csrf', errors: [] };
    answers = [answer(403, stale), answer(200, session('second', 'joss'))];
    expect(await problemOf(sendJson('POST', '/api/thing'))).toMatchObject({ code: 'other-person' });
    expect(requests).toHaveLength(2);
  });

  it('does not send again when the role is what the server refused', async () => {
    answers = [answer(403, { title: 'Not allowed', status: 403, code: 'not-allowed', errors: [] })];
    expect(await problemOf(sendJson('POST', '/api/thing'))).toMatchObject({ code: 'not-allowed' });
    expect(requests).toHaveLength(1);
  });

  it('gives undefined when an answer has no body', async () => {
    answers = [new Response(null, { status: 204 })];
    expect(await sendJson('DELETE', '/api/thing')).toBeUndefined();
  });
});
