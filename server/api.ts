import express, { Router, type RequestHandler } from 'express';
import { access, getRule, type Rule } from './access.ts';
import type { Deps } from './context.ts';
import { notFound, wrongKind } from './errors.ts';
import { authorise } from './middleware/authorise.ts';
import { refuseBearer } from './middleware/bearer.ts';
import { refuseForeignRequests } from './middleware/csrf.ts';
import { readContext, readSession } from './middleware/sessions.ts';
import type { RouteDefinition } from './route-definition.ts';
import { validate, validateQuery } from './validate.ts';

type Rules = Readonly<Record<string, Rule>>;

/** Throws, before anything listens, for a route that nobody has ruled on or that the rule does not fit. */
export function checkRoutes(routes: readonly RouteDefinition[], rules: Rules = access): void {
  const seen = new Set<string>();
  for (const { method, path, action } of routes) {
    const name = `${method.toUpperCase()} ${path}`;
    if (seen.has(name)) throw new Error(`${name} is registered twice`);
    seen.add(name);
    const { subject } = getRule(action, rules);
    const hasId = path.split('/').includes(':id');
    if (hasId && subject === undefined) throw new Error(`${name}: has :id, but "${action}" names no subject`);
    if (!hasId && subject !== undefined)
      throw new Error(`${name}: "${action}" is about a ${subject}, but no :id`);
  }
}

const parseJson = express.json({ limit: '1mb' });

function readBody({ body }: RouteDefinition): RequestHandler[] {
  if (body === undefined) return [];
  const requireJson: RequestHandler = (request, _response, next) => {
    const isNamed = request.headers['content-type'] !== undefined;
    if (isNamed && request.is('json') === false) throw wrongKind('Send JSON (content-type application/json)');
    next();
  };
  return [requireJson, parseJson];
}

function answer(definition: RouteDefinition, deps: Deps): RequestHandler {
  const { body, query, status = 200, handle } = definition;
  return async (request, response) => {
    const result = await handle({
      deps,
      context: readContext(request) as Parameters<typeof handle>[0]['context'],
      params: request.params as Record<string, string>,
      query: query === undefined ? {} : validateQuery(query, request.query),
      body: body === undefined ? undefined : validate(body, request.body as unknown),
      request,
      response,
    });
    if (response.headersSent) return;
    if (result === undefined) response.status(204).end();
    else response.status(status).json(result);
  };
}

const neverStore: RequestHandler = (_request, response, next) => {
  response.set('cache-control', 'no-store');
  next();
};

/** Everything under /api. Each request passes the same gates in the same order; a route cannot leave one out. */
export function makeApi(deps: Deps, routes: readonly RouteDefinition[], rules: Rules = access): Router {
  checkRoutes(routes, rules);
  const router = Router();
  router.use(neverStore, refuseBearer, readSession(deps));
  for (const definition of routes) {
    router[definition.method](
      definition.path,
      authorise(deps, getRule(definition.action, rules)),
      refuseForeignRequests,
      readBody(definition),
      definition.before?.(deps) ?? [],
      answer(definition, deps),
    );
  }
  router.use(() => {
    throw notFound();
  });
  return router;
}
