import { createHash } from 'node:crypto';
import type { Request, RequestHandler, Response } from 'express';
import { ipKeyGenerator, rateLimit } from 'express-rate-limit';
import type { Config } from '../config.ts';
import { slowDown, type AppError } from '../errors.ts';
import { findBrowser } from './known-browser.ts';
import { getActor } from './sessions.ts';
import { SignInTurns } from './sign-in-turns.ts';

interface Limit {
  limit: number;
  windowMilliseconds: number;
  key: (request: Request) => string;
}

function limitRequests({ limit, windowMilliseconds, key }: Limit): RequestHandler {
  return rateLimit({
    limit,
    windowMs: windowMilliseconds,
    keyGenerator: key,
    standardHeaders: 'draft-7',
    legacyHeaders: false,
    // Whether a proxy's header is believed is said in the settings (`trustProxy`): there is nothing to warn about.
    validate: { xForwardedForHeader: false },
    handler: (_request, _response, next) => next(slowDown()),
  });
}

function readAddress(request: Request): string {
  return ipKeyGenerator(request.ip ?? '');
}

function readEmail(request: Request): string {
  const email: unknown = (request.body as { email?: unknown } | undefined)?.email;
  return typeof email === 'string' ? email.trim().toLowerCase() : '';
}

/** What no turn was found for, with the time after which the next one is made good. */
function refuse(response: Response, turns: SignInTurns): AppError {
  response.set('retry-after', String(turns.turnSeconds));
  return slowDown('Too many wrong passwords were tried here; wait a few seconds and try again');
}

/** Goes on when a turn is free for this key; it is used up by a wrong password only. */
function takeTurn(turns: SignInTurns, findKey: (request: Request) => string | undefined): RequestHandler {
  return async (request, response, next) => {
    const key = findKey(request);
    if (key === undefined) return next();
    const left = new AbortController();
    response.once('close', () => left.abort());
    if (!(await turns.take(key, left.signal))) return next(refuse(response, turns));
    // Who goes away before the answer has had the guess all the same.
    response.once('finish', () => {
      if (response.statusCode !== 401) turns.giveBack(key);
    });
    next();
  };
}

/**
 * Wrong passwords slow down and never lock out. Ten for a pair of address and e-mail are free; after that one guess
 * at a time is looked at, at the given pace, drawn by lot from all that wait. A browser that this person has signed
 * in from has turns of its own, which nobody else can use up. An address has three hundred over all e-mails, in the
 * same way but faster; it comes first, so that no address can fill the memory with pairs.
 */
export function limitSignIns(config: Config): RequestHandler[] {
  const turnMilliseconds = config.signInTurnSeconds * 1000;
  const patienceMilliseconds = 3 * turnMilliseconds;
  const findKnown = (request: Request) => findBrowser(config, readEmail(request), request);
  const digest = (text: string) => createHash('sha256').update(text).digest('base64url');
  const ofAddress = new SignInTurns({
    most: 300,
    seats: 300,
    turnMilliseconds: turnMilliseconds / 10,
    patienceMilliseconds,
  });
  const ofPair = new SignInTurns({ most: 10, seats: 30, turnMilliseconds, patienceMilliseconds });
  return [
    takeTurn(ofAddress, (request) => (findKnown(request) === undefined ? readAddress(request) : undefined)),
    takeTurn(ofPair, (request) =>
      digest(`${findKnown(request) ?? readAddress(request)}\n${readEmail(request)}`),
    ),
  ];
}

const byPerson = (request: Request) => getActor(request)?.publicId ?? readAddress(request);

/** A person, not an address: snapping answers where the network is and could be used to trace it. */
export function limitSnaps(): RequestHandler {
  return limitRequests({
    limit: 60,
    windowMilliseconds: 60_000,
    key: byPerson,
  });
}

/** Against a loop, not against a person: nobody chooses thirty files or begins thirty applications in a minute. */
export function limitArrivals(): RequestHandler {
  return limitRequests({ limit: 30, windowMilliseconds: 60_000, key: byPerson });
}
