import express from 'express';
import { afterAll, beforeAll, describe, expect, it } from 'vitest';
import { access, getRule, type Rule } from '../../server/access.ts';
import { checkRoutes, makeApi } from '../../server/api.ts';
import { answerProblem } from '../../server/middleware/problems.ts';
import { logRequests } from '../../server/middleware/request-log.ts';
import { route, type RouteDefinition } from '../../server/route-definition.ts';
import { allRoutes } from '../../server/routes/table.ts';
import { makeFixtureWorld, type FixtureWorld } from '../support/fixture-world.ts';
import { makeTestApp, type TestApp } from '../support/test-app.ts';
import { insertObjects } from './access-objects.ts';
import { walkRoutes } from './access-walk.ts';

let desk: TestApp;
let world: FixtureWorld;
beforeAll(async () => {
  desk = await makeTestApp();
  world = await makeFixtureWorld(desk.deps.db);
});
afterAll(() => desk.stop());

async function makeObjects() {
  const { applicant, rival } = world.people;
  return {
    own: await insertObjects(desk.deps, world, applicant, 'incomplete'),
    other: await insertObjects(desk.deps, world, rival, 'incomplete'),
    draft: await insertObjects(desk.deps, world, applicant, 'draft'),
  };
}

describe('who may do what', () => {
  it('is, on every route and for every role, own and other things, what access.ts says', async () => {
    const walk = { app: desk.app, routes: allRoutes, rules: access, people: world.people, makeObjects };
    expect(await walkRoutes(walk)).toEqual([]);
  }, 240_000);

  it('would be found out by the same walk if a gate stood open or shut wrongly', async () => {
    const open: Record<string, Rule> = { ...access };
    open['people.list'] = { roles: { ...access['people.list'].roles, applicant: 'any', auditor: 'none' } };
    open['mailbox.read'] = {
      ...access['mailbox.read'],
      roles: { ...access['mailbox.read'].roles, applicant: 'any' },
    };
    const routes = allRoutes.filter(({ path }) => path === '/people' || path === '/mailbox/:id');
    const app = express()
      .use(logRequests(desk.deps.log))
      .use('/api', makeApi(desk.deps, [...allRoutes], open))
      .use(answerProblem);
    const walk = { app, routes, rules: access, people: world.people, makeObjects };
    expect(await walkRoutes(walk)).toEqual([
      'get /people (applicant, own): got 200 , expected 403',
      'get /mailbox/:id (applicant, other): got 200 , expected 404',
      'get /people (auditor, own): got 403 not-allowed, expected allowed',
    ]);
  });
});

describe('a route', () => {
  const handle = () => undefined;

  it('with an action that has no rule is a type error, and stops the server from starting', () => {
    const planted = route({
      method: 'get',
      path: '/planted',
      // @ts-expect-error: no such action in access.ts
      action: 'planted.read',
      handle,
    });
    expect(() => checkRoutes([...allRoutes, planted])).toThrow(/no rule: got action "planted.read"/);
    expect(() => makeApi(desk.deps, [planted])).toThrow(/no rule/);
    // A name that every object inherits is no action either.
    expect(() => getRule('constructor')).toThrow(/no rule/);
  });

  it('with a rule that forgets a role stops the server from starting', () => {
    const { auditor: _left, ...roles } = access['people.list'].roles;
    const rules = { 'people.list': { roles } } as unknown as Record<string, Rule>;
    expect(() => getRule('people.list', rules)).toThrow('access.ts, "people.list": no reach for auditor');
  });

  it('about an object without a subject in its rule, or the other way round, stops the server from starting', () => {
    const withId = route({ method: 'get', path: '/people/:id', action: 'people.list', handle });
    const withoutId = route({ method: 'get', path: '/run', action: 'run.read', handle });
    expect(() => checkRoutes([withId])).toThrow(/"people.list" names no subject/);
    expect(() => checkRoutes([withoutId])).toThrow(/"run.read" is about a run, but no :id/);
  });

  it('registered twice stops the server from starting', () => {
    const people = allRoutes.find(({ path }) => path === '/people') as RouteDefinition;
    expect(() => checkRoutes([...allRoutes, people])).toThrow('GET /people is registered twice');
  });

  it('is there for every action, and every registered route passes the check', () => {
    checkRoutes(allRoutes);
    const used = new Set<string>(allRoutes.map(({ action }) => action));
    expect(Object.keys(access).filter((action) => !used.has(action))).toEqual([]);
  });
});
