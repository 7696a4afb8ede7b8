import { mkdirSync, writeFileSync } from 'node:fs';
import { join } from 'node:path';
import request from 'supertest';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { route } from '../../server/route-definition.ts';
import { allRoutes } from '../../server/routes/table.ts';
import { makeTestApp, readProblem, signInAs, type TestApp } from '../support/test-app.ts';

const long = 'a long answer '.repeat(500);
const more = [
  route({ method: 'get', path: '/long', action: 'session.read', handle: () => ({ long }) }),
  route({
    method: 'get',
    path: '/stream',
    action: 'session.read',
    handle({ response }) {
      response.type('text/event-stream').end(`data: ${long}\n\n`);
    },
  }),
];

let desk: TestApp;
beforeAll(async () => {
  desk = await makeTestApp({ routes: [...allRoutes, ...more] });
  const { clientDir } = desk.deps.config;
  mkdirSync(join(clientDir, 'assets'), { recursive: true });
  writeFileSync(join(clientDir, 'index.html'), '<!doctype html><title>The desk</title>');
  writeFileSync(join(clientDir, 'favicon.svg'), '<svg/>');
  writeFileSync(join(clientDir, '.hidden'), 'not for anybody');
  writeFileSync(join(clientDir, 'assets', 'index-4f1c.js'), `/* ${long} */`);
});
afterAll(() => desk.stop());

describe('the headers of every answer', () => {
  it('let pages load only what this server sends, and nothing inline', async () => {
    for (const path of ['/', '/api/session', '/api/none', '/assets/index-4f1c.js']) {
      const { headers } = await request(desk.app).get(path);
      expect(headers['content-security-policy']).toBe(
        "default-src 'self';script-src 'self';style-src 'self';img-src 'self' data: blob:;font-src 'self';" +
          "connect-src 'self';frame-src 'self';object-src 'none';base-uri 'none';form-action 'self';" +
          "frame-ancestors 'none'",
      );
      expect(headers).toMatchObject({
        'x-frame-options': 'DENY',
        'x-content-type-options': 'nosniff',
        'referrer-policy': 'no-referrer',
      });
      expect(headers['x-powered-by']).toBeUndefined();
    }
  });

  it('promise https only where the desk is reached by it', async () => {
    const plain = await request(desk.app).get('/');
    expect(plain.headers['strict-transport-security']).toBeUndefined();
    const secure = await request(desk.another({ publicUrl: 'https://desk.example' })).get('/');
    expect(secure.headers['strict-transport-security']).toMatch(/^max-age=\d+/);
  });
});

describe('the built pages', () => {
  it('answer every address of the client with index.html, which is asked for each time', async () => {
    for (const path of ['/', '/desk', '/desk/abc?sheet=findings', '/projects/x/form/site']) {
      const answer = await request(desk.app).get(path).expect(200);
      expect(answer.text).toContain('The desk');
      expect(answer.headers['cache-control']).toBe('no-cache');
    }
  });

  it('keep files whose names carry a hash for ever, and others not', async () => {
    const hashed = await request(desk.app).get('/assets/index-4f1c.js').expect(200);
    expect(hashed.headers['cache-control']).toBe('public, max-age=31536000, immutable');
    expect(hashed.headers['content-encoding']).toBe('gzip');
    const plain = await request(desk.app).get('/favicon.svg').expect(200);
    expect(plain.headers['cache-control']).toBe('no-cache');
  });

  it('are not index.html in place of a file that is missing, of the API, or of what is not reading', async () => {
    for (const path of [
      '/assets/index-0000.js',
      '/api',
      '/api/',
      '/api/desk',
      '/.hidden',
      '/..%2f..%2fetc/passwd.txt',
    ]) {
      expect(readProblem(await request(desk.app).get(path)).status, path).toBe(404);
    }
    expect(readProblem(await request(desk.app).post('/desk')).status).toBe(404);
  });

  it('say what to do where nobody has built them', async () => {
    const app = desk.another({ clientDir: join(desk.deps.config.clientDir, 'nowhere') });
    expect(readProblem(await request(app).get('/'))).toMatchObject({
      status: 404,
      title: expect.stringContaining('npm start') as string,
    });
  });
});

describe('compression', () => {
  it('is for answers and not for event streams', async () => {
    const answer = await request(desk.app).get('/api/long').expect(200);
    expect(answer.headers['content-encoding']).toBe('gzip');
    const stream = await request(desk.app).get('/api/stream').expect(200);
    expect(stream.headers['content-encoding']).toBeUndefined();
  });
});

describe('health', () => {
  it('is good while the database answers, for anybody', async () => {
    await request(desk.app).get('/api/health').expect(200, { ok: true });
  });

  it('is a fault, not a hanging or ended process, while it does not', async () => {
    const lonely = await makeTestApp();
    await lonely.deps.db.destroy();
    await request(lonely.app).get('/api/health').timeout(5000).expect(500);
    await request(lonely.app)
      .get('/api/session')
      .set('cookie', 'feederwright.session=s%3Aabc.def')
      .expect(500);
    lonely.deps.db.initialize();
    await request(lonely.app).get('/api/health').expect(200);
    await lonely.stop();
  });
});

describe('the list of people', () => {
  it('names everybody with role and organisation, closed accounts too, and no password hash', async () => {
    const browser = await signInAs(desk.app, desk.people.auditor);
    const { body, text } = await browser.get('/api/people').expect(200);
    expect(body).toHaveLength(7);
    expect(body).toContainEqual({
      publicId: expect.any(String) as string,
      name: 'stranger',
      email: 'stranger@desk.example',
      role: 'applicant',
      organisation: 'Pell Turbines',
      disabled: false,
    });
    expect(body).toContainEqual(
      expect.objectContaining({ name: 'closed', disabled: true, organisation: null }),
    );
    expect(text).not.toContain('argon2');
  });
});
