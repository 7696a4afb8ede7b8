import type { Request, Response } from 'express';
import type { Deps, SignedInContext } from '../context.ts';
import { route } from '../route-definition.ts';
import { followEvents } from '../services/live-events.ts';
import { findActor } from '../services/sessions.ts';

/** Often enough that no proxy takes the stream for dead. */
const heartbeatMs = 15_000;
/** How soon a browser tries again after the stream was cut. */
const retryMs = 2000;
/** What waits for a reader that does not read. */
const mostWaitingBytes = 256 * 1024;

function isSessionAlive(request: Request): Promise<boolean> {
  return new Promise((resolve, reject) => {
    request.sessionStore.get(request.sessionID, (error: unknown, session) =>
      error ? reject(error as Error) : resolve(Boolean(session)),
    );
  });
}

/** A stream outlives the request that was allowed: who signed out, or was shut out, hears no more. */
async function isStillSignedIn(deps: Deps, context: SignedInContext, request: Request): Promise<boolean> {
  const actor = await findActor(deps.db, context.actor.id);
  return actor !== undefined && actor.role === context.actor.role && (await isSessionAlive(request));
}

function openStream(response: Response): (text: string) => void {
  response.set({
    'content-type': 'text/event-stream; charset=utf-8',
    // A compressor or a proxy that collects bytes would hold every event back.
    'cache-control': 'no-cache, no-transform',
    'x-accel-buffering': 'no',
  });
  response.flushHeaders();
  return (text) => {
    // Between its end and its 'close' something may still be said.
    if (response.writableEnded || response.destroyed) return;
    if (response.writableLength > mostWaitingBytes) response.destroy();
    else response.write(text);
  };
}

function streamEvents(deps: Deps, context: SignedInContext, request: Request, response: Response): void {
  const write = openStream(response);
  write(`retry: ${retryMs}\n\n`);
  const unfollow = followEvents(deps, context, {
    hear: (event) => write(`event: change\ndata: ${JSON.stringify(event)}\n\n`),
    // Whoever connects again reads everything again.
    onGap: () => response.end(),
  });
  const heartbeat = setInterval(() => {
    write(': still here\n\n');
    isStillSignedIn(deps, context, request).then(
      (still) => still || response.end(),
      (error: unknown) => deps.log.warn({ err: error }, 'A stream of events could not be checked'),
    );
  }, heartbeatMs);
  response.once('close', () => {
    clearInterval(heartbeat);
    unfollow();
  });
}

export const eventRoutes = [
  route({
    method: 'get',
    path: '/events',
    action: 'events.listen',
    handle: ({ deps, context, request, response }) => streamEvents(deps, context, request, response),
  }),
];
