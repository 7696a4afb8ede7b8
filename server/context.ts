import type { Logger } from 'pino';
import type { Database } from '../db/connection.ts';
import type { LiveEvent } from '../shared/schemas/events.ts';
import type { Role } from '../shared/schemas/sessions.ts';
import type { Compute } from './compute.ts';
import type { Config } from './config.ts';

/** The signed-in person in whose name something is done. */
export interface Actor {
  id: number;
  publicId: string;
  name: string;
  email: string;
  role: Role;
  organisationId: number | null;
}

/** All that a service may know of who asks and when: no request, no clock of its own. */
export interface Context {
  actor: Actor | null;
  now: Date;
  ip: string;
  requestId: string;
}

export interface SignedInContext extends Context {
  actor: Actor;
}

/** What the server needs of the queue; called after commit, never inside a transaction. */
export interface RunQueue {
  enqueue(runId: number, attempt: number): Promise<void>;
  enqueueRoom(roomId: number, attempt: number): Promise<void>;
}

/** The live events that workers and services publish; `subscribe` returns the way to end it. */
export interface LiveEvents {
  publish(event: LiveEvent): Promise<void>;
  /** `onGap` is called when events may have passed unheard: who shows something reads it again. */
  subscribe(listener: (event: LiveEvent) => void, onGap?: () => void): () => void;
}

/** What services are handed first, made once at start (or by a test). */
export interface Deps {
  db: Database;
  config: Config;
  queue: RunQueue;
  events: LiveEvents;
  /** For what somebody waits for: trials, remedies. Runs are the worker's. */
  compute: Pick<Compute, 'ask'>;
  log: Logger;
}
