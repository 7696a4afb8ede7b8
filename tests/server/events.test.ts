import { once } from 'node:events';
import { createServer, type Server } from 'node:http';
import type { AddressInfo } from 'node:net';
import { setTimeout as sleep } from 'node:timers/promises';
import { afterAll, afterEach, beforeAll, expect, it, vi } from 'vitest';
import { createApp } from '../../server/app.ts';
import { openEvents, type OpenEvents } from '../../server/events.ts';
import { createLog } from '../../server/log.ts';
import type { LiveEvent } from '../../shared/schemas/events.ts';
import { insertFixtureApplication, type FixtureApplication } from '../support/fixture-runs.ts';
import { makeFixtureWorld, type FixturePerson, type FixtureWorld } from '../support/fixture-world.ts';
import { Browser, makeTestApp, password, type TestApp } from '../support/test-app.ts';

let test: TestApp;
let world: FixtureWorld;
let events: OpenEvents;
let server: Server;
let own: FixtureApplication;
let foreign: FixtureApplication;
let draftId: string;

beforeAll(async () => {
  test = await makeTestApp();
  world = await makeFixtureWorld(test.deps.db);
  own = await insertFixtureApplication(test.deps.db, world);
  foreign = await insertFixtureApplication(test.deps.db, world, { by: world.people.rival });
  draftId = (await insertFixtureApplication(test.deps.db, world)).publicId;
  await test.deps.db('applications').where({ public_id: draftId }).update({ stage: 'draft' });
  const prefix = test.deps.config.database.name;
  events = openEvents({ ...test.deps.config.redis, prefix }, createLog('silent', 'test'));
  server = createServer(createApp({ ...test.deps, events })).listen(0, '127.0.0.1');
  await once(server, 'listening');
  await untilHeard();
});
afterAll(async () => {
  server.closeAllConnections();
  server.close();
  await events.close();
  await test.stop();
});

/** The subscription takes a moment; what is said before it stands is not heard. */
async function untilHeard(): Promise<void> {
  let heard = false;
  const stop = events.subscribe(() => (heard = true));
  while (!heard) {
    await events.publish({ kind: 'run', id: 'first', applicationId: 'none', version: 1 });
    await sleep(20);
  }
  stop();
}

interface Stream {
  answer: Response;
  heard: LiveEvent[];
  ended: Promise<void>;
  cut(): void;
}

const streams: Stream[] = [];
afterEach(() => streams.splice(0).forEach((stream) => stream.cut()));

async function readCookie(person: FixturePerson): Promise<{ cookie: string; browser: Browser }> {
  const browser = new Browser(server as never);
  const answer = await browser.signIn(world.people[person].email, password);
  expect(answer.status).toBe(200);
  const cookies = [answer.headers['set-cookie'] ?? []].flat() as string[];
  return { cookie: cookies.map((cookie) => cookie.split(';')[0]).join('; '), browser };
}

async function listen(cookie: string): Promise<Stream> {
  const { port } = server.address() as AddressInfo;
  const cutter = new AbortController();
  const headers = { cookie, 'accept-encoding': 'gzip' };
  const answer = await fetch(`http://127.0.0.1:${port}/api/events`, { headers, signal: cutter.signal });
  const heard: LiveEvent[] = [];
  const ended = (async () => {
    let text = '';
    const decoder = new TextDecoder();
    try {
      for await (const chunk of answer.body as unknown as AsyncIterable<Uint8Array>) {
        text += decoder.decode(chunk, { stream: true });
        const messages = text.split('\n\n');
        text = messages.pop() ?? '';
        for (const message of messages) {
          const data = /^event: change\ndata: (.*)$/m.exec(message)?.[1];
          if (data !== undefined) heard.push(JSON.parse(data) as LiveEvent);
        }
      }
    } catch (error) {
      if (!cutter.signal.aborted) throw error;
    }
  })();
  const stream = { answer, heard, ended, cut: () => cutter.abort() };
  streams.push(stream);
  return stream;
}

const changed = (applicationId: string, version = 2): LiveEvent => ({
  kind: 'application',
  id: applicationId,
  applicationId,
  version,
});

async function until(happened: () => boolean): Promise<void> {
  const end = Date.now() + 5000;
  while (!happened()) {
    if (Date.now() > end) throw new Error('It did not happen within 5 s');
    await sleep(10);
  }
}

it('tells an applicant of their organisation alone, and staff of everything that was handed in', async () => {
  const applicant = await listen((await readCookie('applicant')).cookie);
  const rival = await listen((await readCookie('rival')).cookie);
  const reviewer = await listen((await readCookie('reviewer')).cookie);

  const said = [
    changed(foreign.publicId),
    changed(draftId),
    changed(own.publicId, 3),
    changed(own.publicId, 4),
  ];
  for (const event of said) await events.publish(event);
  await events.publish(changed(foreign.publicId, 9));
  await until(() => rival.heard.length === 2 && applicant.heard.length === 3 && reviewer.heard.length === 4);

  expect(applicant.heard).toEqual([said[1], said[2], said[3]]);
  expect(rival.heard).toEqual([changed(foreign.publicId), changed(foreign.publicId, 9)]);
  expect(reviewer.heard.map((event) => event.id)).not.toContain(draftId);
});

it('is a stream that nothing may hold back', async () => {
  const { answer } = await listen((await readCookie('applicant')).cookie);
  expect(answer.headers.get('content-type')).toContain('text/event-stream');
  expect(answer.headers.get('cache-control')).toBe('no-cache, no-transform');
  expect(answer.headers.get('content-encoding')).toBeNull();
});

it('is refused to who is not signed in', async () => {
  const { port } = server.address() as AddressInfo;
  const answer = await fetch(`http://127.0.0.1:${port}/api/events`);
  expect(answer.status).toBe(401);
});

it('ends when events may have passed unheard, so that the page connects and reads again', async () => {
  const listeners: (() => void)[] = [];
  const gappy: OpenEvents = {
    ...events,
    subscribe: (_hear, onGap) => {
      listeners.push(onGap ?? (() => undefined));
      return () => undefined;
    },
  };
  const other = createServer(createApp({ ...test.deps, events: gappy })).listen(0, '127.0.0.1');
  await once(other, 'listening');
  const { cookie } = await readCookie('applicant');
  const { port } = other.address() as AddressInfo;
  const answer = await fetch(`http://127.0.0.1:${port}/api/events`, { headers: { cookie } });
  listeners.forEach((onGap) => onGap());
  expect(await answer.text()).toBe('retry: 2000\n\n');
  other.close();
});

it('ends for who has signed out since, at the next heartbeat', async () => {
  vi.useFakeTimers({ toFake: ['setInterval', 'clearInterval'] });
  try {
    const leaving = await readCookie('applicant');
    const staying = await listen((await readCookie('colleague')).cookie);
    const stream = await listen(leaving.cookie);
    let ended = false;
    void stream.ended.then(() => (ended = true));
    await vi.advanceTimersByTimeAsync(15_000);
    await sleep(100);
    expect(ended).toBe(false);

    await leaving.browser.send('delete', '/api/session').expect(200);
    await vi.advanceTimersByTimeAsync(15_000);
    await until(() => ended);
    await events.publish(changed(own.publicId, 77));
    await until(() => staying.heard.length === 1);
    expect(stream.heard).toEqual([]);
  } finally {
    vi.useRealTimers();
  }
});
