import type { AddressInfo } from 'node:net';
import type { Express } from 'express';
import type { access, Rule } from '../../server/access.ts';
import { getRule } from '../../server/access.ts';
import type { Actor } from '../../server/context.ts';
import type { RouteDefinition } from '../../server/route-definition.ts';
import { newPublicId } from '../../server/services/public-ids.ts';
import type { Problem } from '../../shared/schemas/problems.ts';
import { roles, type Role } from '../../shared/schemas/sessions.ts';
import { password } from '../support/test-app.ts';
import type { Objects } from './access-objects.ts';

type AllObjects = Record<'own' | 'other' | 'draft', Objects>;
type Rules = Readonly<Record<string, Rule>> | typeof access;
type Whose = 'own' | 'other' | 'missing' | 'draft';

interface Caller {
  cookie: string;
  csrfToken: string;
}

/** Signs in with plain fetch: unlike a test agent it lets go of an answer that never ends. */
async function beginSession(base: string, person: Actor | undefined): Promise<Caller> {
  const readCookie = (answer: Response) =>
    answer.headers
      .getSetCookie()
      .map((cookie) => cookie.split(';')[0])
      .join('; ');
  const opened = await fetch(`${base}/api/session`);
  const caller = { cookie: readCookie(opened), csrfToken: ((await opened.json()) as Caller).csrfToken };
  if (person === undefined) return caller;
  const signedIn = await fetch(`${base}/api/session`, {
    method: 'POST',
    headers: { cookie: caller.cookie, 'x-csrf-token': caller.csrfToken, 'content-type': 'application/json' },
    body: JSON.stringify({ email: person.email, password }),
  });
  if (!signedIn.ok) throw new Error(`${person.email} could not sign in: ${await signedIn.text()}`);
  return { cookie: readCookie(signedIn), csrfToken: ((await signedIn.json()) as Caller).csrfToken };
}

interface Answered {
  status: number;
  code: string;
}

type Call = (route: RouteDefinition, id: string) => Promise<Answered>;

async function send(
  base: string,
  caller: Caller,
  { method, path }: RouteDefinition,
  id: string,
): Promise<Answered> {
  const filled = path.replace(':id', id).replace(/:\w+/g, 'site');
  const answer = await fetch(`${base}/api${filled}`, {
    method: method.toUpperCase(),
    headers: { cookie: caller.cookie, 'x-csrf-token': caller.csrfToken, 'content-type': 'application/json' },
    ...(method === 'get' ? {} : { body: '{}' }),
  }).catch((error: unknown) => {
    throw new Error(`${method} ${path} broke off`, { cause: error });
  });
  const isProblem = answer.headers.get('content-type')?.startsWith('application/problem+json');
  if (isProblem) return (await answer.json()) as Problem;
  await answer.body?.cancel();
  return { status: answer.status, code: '' };
}

/** All applicants of this walk belong to the organisation of the own and of the draft things. */
function isInReach(rule: Rule, role: Role, whose: Whose): boolean {
  if (role === 'applicant' && (whose === 'own' || whose === 'draft')) return true;
  if (whose === 'missing' || rule.roles[role] !== 'any') return false;
  const canBeUnfinished = rule.subject !== 'message' && rule.subject !== 'report';
  return !(whose === 'draft' && canBeUnfinished);
}

/** What access.ts says must come: a refusal, or anything that is none. */
function expectStatus(rule: Rule, role: Role | undefined, whose: Whose): 401 | 403 | 404 | 'allowed' {
  if (role === undefined) return rule.anonymous ? 'allowed' : 401;
  if (rule.roles[role] === 'none') return 403;
  return rule.subject === undefined || isInReach(rule, role, whose) ? 'allowed' : 404;
}

function isAsExpected(expected: ReturnType<typeof expectStatus>, status: number, path: string): boolean {
  if (expected !== 'allowed') return status === expected;
  // What stands in a path and is no subject, such as a model's code, need not be there.
  const mayBeMissing = /:(?!id\b)/.test(path) && !path.includes(':id');
  return status < 500 && status !== 401 && status !== 403 && (status !== 404 || mayBeMissing);
}

interface Walk {
  app: Express;
  routes: readonly RouteDefinition[];
  rules: Rules;
  people: Record<Role, Actor>;
  makeObjects: () => Promise<AllObjects>;
}

/** The answers on one route that are not what its rule says, for one role and each kind of object. */
async function walkRoute(
  { rules }: Walk,
  objects: AllObjects,
  call: Call,
  route: RouteDefinition,
  role?: Role,
): Promise<string[]> {
  const rule = getRule(route.action, rules);
  const cases: Whose[] = rule.subject === undefined ? ['own'] : ['own', 'other', 'missing', 'draft'];
  const wrong: string[] = [];
  for (const whose of cases) {
    const object = whose === 'missing' ? undefined : objects[whose];
    const answered = await call(route, (rule.subject && object?.[rule.subject]) ?? newPublicId());
    const expected = expectStatus(rule, role, whose);
    if (isAsExpected(expected, answered.status, route.path)) continue;
    const got = `got ${answered.status} ${answered.code}, expected ${expected}`;
    wrong.push(`${route.method} ${route.path} (${role ?? 'anonymous'}, ${whose}): ${got}`);
  }
  return wrong;
}

/** Every route × anonymous and each role × whose object: the list of answers that are not what the rule says. */
export async function walkRoutes(walk: Walk): Promise<string[]> {
  const server = walk.app.listen(0, '127.0.0.1');
  await new Promise((resolve) => server.once('listening', resolve));
  const base = `http://127.0.0.1:${(server.address() as AddressInfo).port}`;
  const wrong: string[] = [];
  for (const role of [undefined, ...roles]) {
    const person = role && walk.people[role];
    let caller = await beginSession(base, person);
    let objects = await walk.makeObjects();
    for (const route of walk.routes) {
      wrong.push(...(await walkRoute(walk, objects, (to, id) => send(base, caller, to, id), route, role)));
      // Some use up what they are given, where they are allowed to.
      const { subject, roles: reaches } = getRule(route.action, walk.rules);
      const isUsedUp = route.method !== 'get' && subject !== undefined && role && reaches[role] !== 'none';
      if (isUsedUp) objects = await walk.makeObjects();
      if (route.action.startsWith('session.')) caller = await beginSession(base, person);
    }
  }
  server.closeAllConnections();
  await new Promise((resolve) => server.close(resolve));
  return wrong;
}
