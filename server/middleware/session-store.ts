import { ConnectSessionKnexStore } from 'connect-session-knex';
import type { SessionData } from 'express-session';
import type { Deps } from '../context.ts';

type Done = (error?: unknown) => void;

/**
 * Sessions in the table of our own migration. The package hands a fault to its callback and throws it once more into
 * a promise that express-session does not look at, and `touch` does not call back at all when it fails: with the
 * database away for a second, the first would end the process and the second hang the request.
 */
class SessionStore extends ConnectSessionKnexStore {
  override async get(
    sid: string,
    callback: (error: unknown, session?: SessionData | null) => void,
  ): Promise<SessionData | null> {
    return super.get(sid, callback).catch(alreadyTold(null));
  }

  override async set(sid: string, session: SessionData, callback?: Done): Promise<void> {
    return super.set(sid, session, callback).catch(alreadyTold(undefined));
  }

  override async destroy(sid: string, callback?: Done): Promise<number> {
    return super.destroy(sid, callback).catch(alreadyTold(0));
  }

  override async touch(sid: string, session: SessionData, callback?: Done): Promise<void> {
    return super.touch(sid, session).then(
      () => callback?.(),
      (error: unknown) => callback?.(error),
    );
  }
}

function alreadyTold<T>(value: T): () => T {
  return () => value;
}

const cleanupMilliseconds = 10 * 60_000;

export function makeSessionStore({ db, log }: Pick<Deps, 'db' | 'log'>): SessionStore {
  const store = new SessionStore({
    knex: db,
    createTable: false,
    cleanupInterval: cleanupMilliseconds,
    onDbCleanupError: (error) => log.error({ err: error }, 'expired sessions could not be removed'),
  });
  // It looks for the table once, and would refuse for ever if the database was away just then. The table is ours.
  store.ready.catch((error: unknown) => log.error({ err: error }, 'the table of sessions was not found'));
  store.ready = Promise.resolve();
  return store;
}
