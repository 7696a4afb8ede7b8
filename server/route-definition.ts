import type { Static, TSchema } from '@sinclair/typebox';
import type { Request, RequestHandler, Response } from 'express';
import type { access, Action } from './access.ts';
import type { Context, Deps, SignedInContext } from './context.ts';

/** Names behind the colons of a path: '/runs/:id' gives 'id'. */
type ParamNames<Path extends string> = Path extends `${string}:${infer Name}/${infer Rest}`
  ? Name | ParamNames<Rest>
  : Path extends `${string}:${infer Name}`
    ? Name
    : never;

type ContextOf<A extends Action> = (typeof access)[A] extends { anonymous: true } ? Context : SignedInContext;

interface RouteRequest<A extends Action, Path extends string, Body, Query> {
  deps: Deps;
  context: ContextOf<A>;
  params: Record<ParamNames<Path>, string>;
  query: Query;
  body: Body;
  /** For streams, cookies and headers; everything else has been read and checked already. */
  request: Request;
  response: Response;
}

interface Route<A extends Action, Path extends string, B extends TSchema, Q extends TSchema> {
  method: 'get' | 'post' | 'put' | 'delete';
  /** Below /api. `:id` is the subject of the action's rule. */
  path: Path;
  action: A;
  /** JSON body; anything else is refused before the handler. */
  body?: B;
  /** Query string; strings are turned into the numbers and booleans asked for, defaults filled in. */
  query?: Q;
  /** Runs after the person is allowed and before the body is checked: uploads, rate limits. */
  before?: (deps: Deps) => RequestHandler[];
  /** Of an answer with a body; 200 unless said otherwise. */
  status?: number;
  /** What it returns is sent as JSON; nothing returned is 204, unless it answered by itself. */
  handle(request: RouteRequest<A, Path, Static<B>, Static<Q>>): unknown;
}

export interface RouteDefinition {
  method: 'get' | 'post' | 'put' | 'delete';
  path: string;
  action: Action;
  body?: TSchema;
  query?: TSchema;
  before?: (deps: Deps) => RequestHandler[];
  status?: number;
  handle(request: RouteRequest<Action, string, unknown, unknown>): unknown;
}

/** Checks a route's handler against its path, action and schemas, then forgets the details. */
export function route<A extends Action, Path extends string, B extends TSchema, Q extends TSchema>(
  definition: Route<A, Path, B, Q>,
): RouteDefinition {
  return definition as unknown as RouteDefinition;
}
