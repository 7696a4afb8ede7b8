import http from 'node:http';
import type { AddressInfo } from 'node:net';
import type { Express } from 'express';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { Browser, makeTestApp, password, readProblem, signInAs, type TestApp } from '../support/test-app.ts';

let desk: TestApp;
beforeAll(async () => {
  desk = await makeTestApp();
});
afterAll(() => desk.stop());

/** As many as are counted before the pair of address and e-mail has to wait. */
const attempts = 10;

async function useUp(browser: Browser, email: string): Promise<void> {
  for (let attempt = 0; attempt < attempts; attempt += 1) {
    expect((await browser.signIn(email, 'not it')).status).toBe(401);
  }
}

/** Signs in from another address of this machine, which all of 127/8 is. */
async function signInFrom(localAddress: string, port: number, email: string): Promise<number> {
  const ask = (method: string, headers: http.OutgoingHttpHeaders, body?: string) =>
    new Promise<{ status: number; cookie: string; text: string }>((resolve, reject) => {
      const target = { host: '127.0.0.1', port, path: '/api/session', method, headers, localAddress };
      const sent = http.request(target, (answer) => {
        let text = '';
        answer.on('data', (part: Buffer) => (text += part.toString()));
        answer.on('end', () => {
          const cookie = (answer.headers['set-cookie'] ?? []).map((value) => value.split(';')[0]).join('; ');
          resolve({ status: answer.statusCode ?? 0, cookie, text });
        });
      });
      sent.on('error', reject);
      sent.end(body);
    });
  const { cookie, text } = await ask('GET', {});
  const { csrfToken } = JSON.parse(text) as { csrfToken: string };
  const headers = { cookie, 'x-csrf-token': csrfToken, 'content-type': 'application/json' };
  return (await ask('POST', headers, JSON.stringify({ email, password }))).status;
}

/** So long that a turn does not come by itself within a test. */
const slow = { signInTurnSeconds: 300 };
const quick = { signInTurnSeconds: 0.3 };

/** No answer in this time is one that waits for its turn. */
const waitMilliseconds = 1500;

async function expectToWait(from: Express | Browser, email: string): Promise<void> {
  const browser = from instanceof Browser ? from : new Browser(from);
  await browser.open();
  const sent = browser.send('post', '/api/session', { email, password }).timeout(waitMilliseconds);
  await expect(sent).rejects.toThrow(/Timeout/);
}

/** Guesses as fast as it is answered until it is told to stop; gives how many guesses were looked at. */
function guessWithoutPause(app: Express, email: string) {
  let goesOn = true;
  const seen: number[] = [];
  const guess = async () => {
    const browser = new Browser(app);
    while (goesOn) seen.push((await browser.signIn(email, 'not it')).status);
  };
  const guessers = Array.from({ length: 4 }, guess);
  return {
    async stop() {
      goesOn = false;
      await Promise.all(guessers);
      return seen.filter((status) => status === 401).length;
    },
  };
}

describe('after ten wrong passwords', () => {
  it('one more has to wait for its turn, also with other capitals', async () => {
    const app = desk.another(slow);
    await useUp(new Browser(app), desk.people.reviewer.email);
    await expectToWait(app, desk.people.reviewer.email);
    await expectToWait(app, desk.people.reviewer.email.toUpperCase());
  });

  it('whose turn does not come reads after how long to try again', async () => {
    const app = desk.another({ signInTurnSeconds: 0.5 });
    await useUp(new Browser(app), desk.people.reviewer.email);
    // Forty at once: each waits for three turns at most.
    const answers = await Promise.all(
      Array.from({ length: 40 }, () => new Browser(app).signIn(desk.people.reviewer.email, 'not it')),
    );
    const refused = answers.filter(({ status }) => status === 429);
    expect(refused.length).toBeGreaterThan(0);
    expect(readProblem(refused[0]!).code).toBe('slow-down');
    expect(Number(refused[0]!.headers['retry-after'])).toBeGreaterThan(0);
  }, 30_000);

  it('the person is slowed down but not locked out in a fresh browser at the same address', async () => {
    const app = desk.another(quick);
    await useUp(new Browser(app), desk.people.reviewer.email);
    expect((await new Browser(app).signIn(desk.people.reviewer.email)).status).toBe(200);
  });

  it('the person still gets in while somebody at the same address guesses without pause', async () => {
    const app = desk.another(quick);
    const { email } = desk.people.reviewer;
    const startedAt = Date.now();
    await useUp(new Browser(app), email);
    const guesser = guessWithoutPause(app, email);
    const own = new Browser(app);
    let status = 0;
    // Each try has three draws among five: twelve tries all fail once in three million times.
    for (let attempt = 0; status !== 200 && attempt < 12; attempt += 1)
      status = (await own.signIn(email)).status;
    const looked = await guesser.stop();
    const turns = (Date.now() - startedAt) / (quick.signInTurnSeconds * 1000);
    expect(status).toBe(200);
    // Bounded: what was looked at beside the first ten are the turns of that time, never all that was asked.
    expect(looked).toBeLessThanOrEqual(Math.ceil(turns) + 1);
  }, 30_000);

  it('another person signs in from the same address at once', async () => {
    const app = desk.another(slow);
    await useUp(new Browser(app), desk.people.reviewer.email);
    expect((await new Browser(app).signIn(desk.people.planner.email)).status).toBe(200);
  });

  it('the person signs in from another address at once', async () => {
    const app = desk.another(slow);
    await useUp(new Browser(app), desk.people.reviewer.email);
    const server = app.listen(0, '127.0.0.1');
    await new Promise((resolve) => server.once('listening', resolve));
    const { port } = server.address() as AddressInfo;
    expect(await signInFrom('127.0.0.77', port, desk.people.reviewer.email)).toBe(200);
    await new Promise((resolve) => server.close(resolve));
  });

  it('the person signs in at once from the same address with a browser they used before', async () => {
    const app = desk.another(slow);
    const known = await signInAs(app, desk.people.reviewer);
    await known.send('delete', '/api/session').expect(200);
    await known.open();
    await useUp(new Browser(app), desk.people.reviewer.email);
    expect((await known.signIn(desk.people.reviewer.email)).status).toBe(200);
  });

  it('of a known browser, that browser has to wait too, and for other e-mails it gains nothing', async () => {
    const app = desk.another(slow);
    const known = await signInAs(app, desk.people.reviewer);
    await known.send('delete', '/api/session').expect(200);
    await known.open();
    await useUp(known, desk.people.reviewer.email);
    await expectToWait(known, desk.people.reviewer.email);
    await useUp(new Browser(app), desk.people.planner.email);
    await expectToWait(known, desk.people.planner.email);
  });
});

describe('behind a proxy on this machine', () => {
  async function signInBehind(app: Express, address: string, typed: string): Promise<number> {
    const browser = new Browser(app);
    await browser.open();
    const body = { email: desk.people.reviewer.email, password: typed };
    const sent = browser.send('post', '/api/session', body).set('x-forwarded-for', address);
    return (await sent.timeout(waitMilliseconds)).status;
  }

  it('each address counts by itself where the settings trust it, and a forged one changes nothing where they do not', async () => {
    const trusting = desk.another({ ...slow, trustProxy: 'loopback' });
    const plain = desk.another(slow);
    for (let attempt = 0; attempt < attempts; attempt += 1) {
      expect(await signInBehind(trusting, '203.0.113.5', 'not it')).toBe(401);
      expect(await signInBehind(plain, `203.0.113.${attempt}`, 'not it')).toBe(401);
    }
    await expect(signInBehind(trusting, '203.0.113.5', password)).rejects.toThrow(/Timeout/);
    expect(await signInBehind(trusting, '203.0.113.6', password)).toBe(200);
    await expect(signInBehind(plain, '203.0.113.99', password)).rejects.toThrow(/Timeout/);
  }, 30_000);
});

describe('signing in well', () => {
  it('costs nothing, however often', async () => {
    const app = desk.another();
    for (let time = 0; time < attempts + 3; time += 1) {
      expect((await new Browser(app).signIn(desk.people.auditor.email)).status).toBe(200);
    }
  });
});
