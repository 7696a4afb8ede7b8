import { randomBytes } from 'node:crypto';
import { join } from 'node:path';
import type { Express } from 'express';
import type { DestinationStream } from 'pino';
import request, { type Response } from 'supertest';
import { insertOrganisation } from '../../db/repositories/organisations.ts';
import { insertUser } from '../../db/repositories/users.ts';
import { createApp } from '../../server/app.ts';
import { readConfig, type Config } from '../../server/config.ts';
import type { Deps } from '../../server/context.ts';
import { createLog } from '../../server/log.ts';
import type { RouteDefinition } from '../../server/route-definition.ts';
import { hashPassword } from '../../server/services/passwords.ts';
import type { LiveEvent } from '../../shared/schemas/events.ts';
import type { Problem } from '../../shared/schemas/problems.ts';
import { roles, type Role, type SessionView } from '../../shared/schemas/sessions.ts';
import { makeTestDatabase } from './database.ts';
import { makeTestDirectory, removeTestDirectory } from './directories.ts';
import { getTestServices } from './services.ts';

export const password = 'correct horse battery staple';

export interface TestPerson {
  id: number;
  email: string;
  role: Role;
  organisationId: number | null;
}

export interface TestApp {
  app: Express;
  deps: Deps;
  /** One of each role, an applicant of another organisation, and a reviewer whose account is closed. */
  people: Record<Role | 'stranger' | 'closed', TestPerson>;
  /** What was asked of the queue and of the live events, which do nothing more here. */
  enqueued: { runId: number; attempt: number }[];
  enqueuedRooms: { roomId: number; attempt: number }[];
  published: LiveEvent[];
  /** Another server on the same database, with its own counters. */
  another(overrides?: Partial<Config>): Express;
  stop(): Promise<void>;
}

export interface TestAppSettings {
  config?: Partial<Config>;
  routes?: readonly RouteDefinition[];
  logTo?: DestinationStream;
}

function makeConfig(directory: string, database: Config['database']): Config {
  const { redis } = getTestServices();
  const config = readConfig({
    FEEDERWRIGHT_PORT: '0',
    FEEDERWRIGHT_DATABASE_PORT: String(database.port),
    FEEDERWRIGHT_DATABASE_PASSWORD: database.password,
    FEEDERWRIGHT_REDIS_PORT: String(redis.port),
    FEEDERWRIGHT_REDIS_PASSWORD: redis.password,
    FEEDERWRIGHT_SMTP_PORT: '9',
    FEEDERWRIGHT_SESSION_SECRET: randomBytes(32).toString('hex'),
    FEEDERWRIGHT_FILES_DIR: join(directory, 'files'),
    FEEDERWRIGHT_MAILBOX_DIR: join(directory, 'mailbox'),
    FEEDERWRIGHT_CLIENT_DIR: join(directory, 'client'),
    FEEDERWRIGHT_DEMO: 'true',
  });
  return { ...config, database };
}

async function insertPeople(deps: Deps): Promise<TestApp['people']> {
  const passwordHash = await hashPassword(password);
  const id = () => randomBytes(16).toString('base64url');
  const own = await insertOrganisation(deps.db, { publicId: id(), name: 'Harrow Sun Works' });
  const other = await insertOrganisation(deps.db, { publicId: id(), name: 'Pell Turbines' });
  const insert = async (name: string, role: Role, organisationId: number | null) => {
    const email = `${name}@desk.example`;
    const user = { publicId: id(), organisationId, email, name, passwordHash, role };
    return { id: await insertUser(deps.db, user), email, role, organisationId };
  };
  const people = {} as TestApp['people'];
  for (const role of roles) people[role] = await insert(role, role, role === 'applicant' ? own : null);
  people.stranger = await insert('stranger', 'applicant', other);
  people.closed = await insert('closed', 'reviewer', null);
  await deps.db('users').where({ id: people.closed.id }).update({ disabled_at: new Date() });
  return people;
}

/** The whole server on a database of its own. Call `stop` in afterAll. */
export async function makeTestApp(settings: TestAppSettings = {}): Promise<TestApp> {
  const directory = makeTestDirectory();
  const { db, settings: database, drop } = await makeTestDatabase();
  const config = { ...makeConfig(directory, database), ...settings.config };
  const log = settings.logTo ? createLog('info', 'test', settings.logTo) : createLog('silent', 'test');
  const enqueued: TestApp['enqueued'] = [];
  const enqueuedRooms: TestApp['enqueuedRooms'] = [];
  const published: LiveEvent[] = [];
  const deps: Deps = {
    db,
    config,
    log,
    queue: {
      enqueue: async (runId, attempt) => void enqueued.push({ runId, attempt }),
      enqueueRoom: async (roomId, attempt) => void enqueuedRooms.push({ roomId, attempt }),
    },
    events: { publish: async (event) => void published.push(event), subscribe: () => () => undefined },
    compute: {
      // The real engine without a process of its own, loaded where a test asks it something.
      ask: async (kind, question) =>
        (await import('../../workers/answer-question.ts')).answerQuestion(kind, question),
    },
  };
  return {
    app: createApp(deps, settings.routes),
    deps,
    people: await insertPeople(deps),
    enqueued,
    enqueuedRooms,
    published,
    another: (overrides = {}) => createApp({ ...deps, config: { ...config, ...overrides } }, settings.routes),
    async stop() {
      await drop();
      removeTestDirectory(directory);
    },
  };
}

/** A browser: keeps its cookies and sends the session's CSRF token. */
export class Browser {
  readonly agent: ReturnType<typeof request.agent>;
  csrfToken = '';

  constructor(app: Express) {
    this.agent = request.agent(app);
  }

  async open(): Promise<SessionView> {
    const answer = await this.agent.get('/api/session').expect(200);
    this.csrfToken = (answer.body as SessionView).csrfToken;
    return answer.body as SessionView;
  }

  get(path: string) {
    return this.agent.get(path);
  }

  send(method: 'post' | 'put' | 'delete', path: string, body?: object) {
    const sent = this.agent[method](path).set('x-csrf-token', this.csrfToken);
    return body === undefined ? sent : sent.send(body);
  }

  async signIn(email: string, typed = password): Promise<Response> {
    if (this.csrfToken === '') await this.open();
    const answer = await this.send('post', '/api/session', { email, password: typed });
    if (answer.status === 200) this.csrfToken = (answer.body as SessionView).csrfToken;
    return answer;
  }
}

export async function signInAs(app: Express, person: { email: string }): Promise<Browser> {
  const browser = new Browser(app);
  const answer = await browser.signIn(person.email);
  if (answer.status !== 200)
    throw new Error(`${person.email} could not sign in: ${JSON.stringify(answer.body)}`);
  return browser;
}

export function readProblem(answer: Response): Problem {
  if (answer.type !== 'application/problem+json') {
    throw new Error(`got ${answer.status} ${answer.type}, expected application/problem+json: ${answer.text}`);
  }
  return JSON.parse(answer.text) as Problem;
}
