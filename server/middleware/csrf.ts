import { csrfSync } from 'csrf-sync';
import type { Request, RequestHandler } from 'express';

const csrf = csrfSync({ size: 32 });

/** Refuses everything but GET and HEAD without the session's own token in x-csrf-token. */
export const refuseForeignRequests: RequestHandler = csrf.csrfSynchronisedProtection;

/** The session's token, made where there is none yet. */
export function getCsrfToken(request: Request): string {
  return csrf.generateToken(request);
}
