import type { Request, RequestHandler, Response } from 'express';
import session from 'express-session';
import passport from 'passport';
import { Strategy } from 'passport-local';
import type { Actor, Context, Deps } from '../context.ts';
import { notSignedIn } from '../errors.ts';
import { checkPassword, findActor } from '../services/sessions.ts';
import { makeSessionStore } from './session-store.ts';

const sessionMilliseconds = 12 * 60 * 60_000;

type Authenticator = InstanceType<typeof passport.Passport>;
type Done = (error: unknown, actor?: Actor | false) => void;

const authenticators = new WeakMap<Deps, Authenticator>();

/** One for each set of dependencies: tests run several servers in one process. */
function getAuthenticator(deps: Deps): Authenticator {
  const known = authenticators.get(deps);
  if (known !== undefined) return known;
  const made = new passport.Passport();
  made.use(
    new Strategy({ usernameField: 'email' }, (email: string, password: string, done: Done) => {
      checkPassword(deps, { email, password }).then((actor) => done(null, actor), done);
    }),
  );
  made.serializeUser((user, done) => done(null, (user as Actor).id));
  made.deserializeUser((id: number, done: Done) => {
    findActor(deps.db, id).then((actor) => done(null, actor ?? false), done);
  });
  authenticators.set(deps, made);
  return made;
}

/** Who asks, from the session cookie: rolling, 12 hours after the last request. */
export function readSession(deps: Deps): RequestHandler[] {
  const secure = deps.config.publicUrl.startsWith('https:');
  return [
    session({
      name: 'feederwright.session',
      secret: deps.config.sessionSecret,
      store: makeSessionStore(deps),
      resave: false,
      saveUninitialized: false,
      rolling: true,
      // Where the address is https, a proxy on this machine speaks TLS and says so.
      proxy: secure,
      cookie: { httpOnly: true, sameSite: 'lax', secure, path: '/', maxAge: sessionMilliseconds },
    }),
    getAuthenticator(deps).session() as RequestHandler,
  ];
}

export function getActor(request: Request): Actor | null {
  return (request.user as Actor | undefined) ?? null;
}

export function readContext(request: Request): Context {
  return {
    actor: getActor(request),
    now: new Date(),
    ip: request.ip ?? '',
    requestId: String(request.id),
  };
}

/** Checks the e-mail and password of the body. The session gets a new id: one planted before is worth nothing. */
export function signIn(deps: Deps, request: Request, response: Response): Promise<Actor> {
  return new Promise((resolve, reject) => {
    const answer: Done = (error, actor) => {
      if (error !== null && error !== undefined) return reject(error as Error);
      if (actor === undefined || actor === false) return reject(notSignedIn());
      request.logIn(actor, (fault: unknown) => (fault ? reject(fault as Error) : resolve(actor)));
    };
    const check = getAuthenticator(deps).authenticate('local', answer) as RequestHandler;
    void check(request, response, reject);
  });
}

export function signOut(request: Request): Promise<void> {
  return new Promise((resolve, reject) => {
    request.logOut((fault: unknown) => (fault ? reject(fault as Error) : resolve()));
  });
}
